// The window: opens, turns its loop until it is closed.
#include <cstdlib>

#include "core/base/error.h"
#include "core/base/file.h"
#include "viewer/app/commands.h"
#include "viewer/panels/frame.h"

namespace runband {

int view_command(const ViewOptions& options, const Progress& progress) {
  const std::filesystem::path file = options.input.case_file.empty() ? data_folder() / "demo" / "curve12.toml"
                                                                     : std::filesystem::path(options.input.case_file);
  // A case that cannot be read is told on the terminal, before any window opens.
  Case opened = load_case(file, options.input.settings);
  const Store sizes(state_folder());
  const std::unique_ptr<Host> host = open_window("Runband", sizes.layout.width, sizes.layout.height);
  Desk desk({state_folder(), &installed_analyses(), [&host] { host->wake(); }});
  const Prompt recover = desk.prompt;
  if (options.input.settings.empty())
    desk.open(file);
  else
    desk.open(std::move(opened), {});
  desk.prompt = recover;
  Frame frame(*host, desk);
  while (!desk.quit_asked()) {
    progress.check();
    frame.step();
    if (options.frames > 0 && frame.frames() >= options.frames) break;
  }
  return 0;
}

}  // namespace runband
