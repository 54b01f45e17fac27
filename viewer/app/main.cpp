// Start, stop on request, and the one place where a failure becomes a message and an exit status.
#include <pthread.h>

#include <csignal>
#include <exception>
#include <iostream>
#include <optional>
#include <thread>

#include "core/base/error.h"
#include "viewer/app/command_line.h"
#include "viewer/app/progress_line.h"

int main(int argc, char** argv) {
  // SIGINT is taken by a thread of its own, so that a long solve can be stopped cleanly and leaves no half-written
  // file.
  sigset_t interrupt;
  sigemptyset(&interrupt);
  sigaddset(&interrupt, SIGINT);
  pthread_sigmask(SIG_BLOCK, &interrupt, nullptr);
  std::stop_source stop;
  std::thread([&interrupt, stop]() mutable {
    int number = 0;
    sigwait(&interrupt, &number);
    stop.request_stop();
    sigwait(&interrupt, &number);  // asked twice: at once
    std::_Exit(130);
  }).detach();

  std::optional<runband::ProgressLine> line(std::in_place);
  const runband::Progress progress{[&](double fraction, std::string_view what) { line->show(fraction, what); },
                                   stop.get_token()};
  try {
    return runband::run_command_line(argc, argv, progress);
  } catch (const runband::Error& error) {
    line.reset();
    std::cerr << "runband: " << error.what() << "\n";
    return error.exit_status();
  } catch (const std::exception& error) {
    line.reset();
    std::cerr << "runband: unexpected: " << error.what()
              << "\n  this is a fault of the program; please report it with the case that shows it.\n";
    return 70;
  }
}
