// The screens that a developer should look at: draw_screens FOLDER [NAME-PART].
#include <cstdio>
#include <iostream>

#include "core/base/error.h"
#include "core/base/file.h"
#include "tests/panels/driver.h"
#include "viewer/plot/png_file.h"

using namespace runband;

namespace {

void keep(Driver& user, const std::filesystem::path& file) {
  user.settle();
  write_file(file, plot::png_bytes(user.picture(), 96, {}, true));
  std::cout << file.string() << "\n";
}

}  // namespace

int main(int argc, char** argv) {
  if (argc < 2) {
    std::cerr << "draw_screens FOLDER [PART OF A NAME]\n";
    return 2;
  }
  const std::filesystem::path folder = argv[1];
  const std::string only = argc > 2 ? argv[2] : "";
  struct Size {
    const char* name;
    int width, height;
    double scale;
  };
  const Size sizes[] = {{"1280x720", 1280, 720, 1}, {"1920x1080", 1920, 1080, 1}, {"3840x2160", 3840, 2160, 2}};
  try {
    for (const Size& size : sizes) {
      for (const plot::ThemeName theme : {plot::ThemeName::light, plot::ThemeName::dark}) {
        const std::string stem = std::string(size.name) + "_" + plot::theme_name(theme);
        if (stem.find(only) == std::string::npos) continue;
        Driver user(size.width, size.height, size.scale);
        user.desk.layout().theme = theme;
        user.open("curve12.toml");
        keep(user, folder / (stem + "_scene.png"));
        user.key(Key::h);
        keep(user, folder / (stem + "_scene_half_space.png"));
        user.desk.keep_picture(folder / (stem + "_kept.png"));
        user.key(Key::d);
        keep(user, folder / (stem + "_relief.png"));
        user.key(Key::n2);
        keep(user, folder / (stem + "_profiles.png"));
        user.key(Key::n3);
        keep(user, folder / (stem + "_curves.png"));
        user.key(Key::n4);
        keep(user, folder / (stem + "_analyses.png"));
        user.key(Key::k);
        user.key(Key::left, kShift);
        user.key(Key::m);
        user.key(Key::n5);
        keep(user, folder / (stem + "_compare.png"));
        user.key(Key::k, kCtrl);
        keep(user, folder / (stem + "_palette.png"));
        user.key(Key::escape);
        user.key(Key::slash, kShift);
        keep(user, folder / (stem + "_keys.png"));
        user.key(Key::escape);
        user.desk.ask(Prompt::Kind::open);
        keep(user, folder / (stem + "_open.png"));
      }
    }
  } catch (const std::exception& problem) {
    std::cerr << problem.what() << "\n";
    return 1;
  }
  return 0;
}
