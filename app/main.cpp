// SPDX-License-Identifier: GPL-3.0-or-later
// The program: a window where no command is given, else one command on the command line.
#include <unistd.h>

#include <cerrno>
#include <csignal>
#include <cstring>
#include <iostream>
#include <sstream>

#include "app/command/command.hpp"
#if __has_include("app/window/window.hpp")
#include "app/window/window.hpp"
#define BINWRIGHT_HAS_WINDOW
#endif

namespace {

/// @returns 0, or the errno of what went wrong
int write_all(int file, const std::string& text) {
    for (std::size_t done = 0; done < text.size();) {
        const ssize_t written = write(file, text.data() + done, text.size() - done);
        if (written < 0 && errno == EINTR) continue;
        if (written < 0) return errno;
        done += static_cast<std::size_t>(written);
    }
    return 0;
}

}  // namespace

int main(int argc, char** argv) {
    std::signal(SIGPIPE, SIG_IGN);  // a reader that has seen enough is no error
    if (const std::optional<binwright::WindowCall> call = binwright::window_call(argc, argv)) {
#ifdef BINWRIGHT_HAS_WINDOW
        return binwright::open_window(argc, argv, {call->converter_path, call->bin_path, call->demo});
#else
        std::cerr << "this build has no window; see binwright --help\n";
        return 2;
#endif
    }
    std::ostringstream out;
    const int status = binwright::run_command_line(argc, argv, std::cin, out, std::cerr);
    const int failed = write_all(STDOUT_FILENO, out.str());
    if (failed && failed != EPIPE) {
        std::cerr << "standard output cannot be written: " << std::strerror(failed) << '\n';
        return 4;
    }
    return status;
}
