// SPDX-License-Identifier: GPL-3.0-or-later
#include "tests/app/command/program.hpp"

#include <fcntl.h>
#include <poll.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <csignal>
#include <cstdlib>
#include <fstream>
#include <iterator>
#include <stdexcept>

namespace binwright::testing {

namespace fs = std::filesystem;

Folder::Folder() {
    std::string name = (fs::temp_directory_path() / "binwright test XXXXXX").string();
    if (!mkdtemp(name.data())) throw std::runtime_error("no temporary folder: " + name);
    path_ = name;
    environment = {{"HOME", name}, {"XDG_DATA_HOME", name + "/data"}, {"BINWRIGHT_BIN", name + "/own bin.binwright"}, {"NO_COLOR", "1"},
                   {"PATH", "/usr/bin:/bin"}, {"LC_ALL", "C.UTF-8"}};
    for (const char* kept : {"LSAN_OPTIONS", "ASAN_OPTIONS", "UBSAN_OPTIONS"})
        if (const char* value = std::getenv(kept)) environment[kept] = value;
}

Folder::~Folder() {
    std::error_code ignored;
    fs::remove_all(path_, ignored);
}

fs::path Folder::path(const std::string& name) const { return name.empty() ? path_ : path_ / name; }

std::string Folder::write(const std::string& name, const std::string& text) const {
    fs::create_directories(path(name).parent_path());
    std::ofstream(path(name), std::ios::binary) << text;
    return name;
}

std::string Folder::read(const std::string& name) const {
    std::ifstream file(path(name), std::ios::binary);
    if (!file) throw std::runtime_error("no file " + path(name).string());
    return {std::istreambuf_iterator<char>(file), {}};
}

std::vector<std::string> Folder::files() const {
    std::vector<std::string> names;
    for (const fs::directory_entry& entry : fs::recursive_directory_iterator(path_))
        names.push_back(fs::relative(entry.path(), path_).string() + (entry.is_regular_file() ? " " + std::to_string(entry.file_size()) : ""));
    std::ranges::sort(names);
    return names;
}

Answer Folder::run(const std::vector<std::string>& arguments, const std::string& input) const {
    std::vector<std::string> call = {BINWRIGHT_PROGRAM};
    call.insert(call.end(), arguments.begin(), arguments.end());
    return start(call, input);
}

Answer Folder::start(const std::vector<std::string>& call, const std::string& input) const {
    int in[2], out[2], err[2];
    if (pipe2(in, O_CLOEXEC) || pipe2(out, O_CLOEXEC) || pipe2(err, O_CLOEXEC)) throw std::runtime_error("no pipe");
    std::vector<std::string> settings;
    for (const auto& [name, value] : environment) settings.push_back(name + "=" + value);
    std::vector<char*> argv, envp;
    for (const std::string& each : call) argv.push_back(const_cast<char*>(each.c_str()));
    for (const std::string& each : settings) envp.push_back(const_cast<char*>(each.c_str()));
    argv.push_back(nullptr);
    envp.push_back(nullptr);
    const std::string folder = path_.string();
    const pid_t child = fork();
    if (child < 0) throw std::runtime_error("no child process");
    if (child == 0) {
        dup2(in[0], 0);
        dup2(out[1], 1);
        dup2(err[1], 2);
        if (chdir(folder.c_str()) == 0) execve(argv[0], argv.data(), envp.data());
        _exit(127);
    }
    close(in[0]);
    close(out[1]);
    close(err[1]);
    std::signal(SIGPIPE, SIG_IGN);
    Answer answer;
    std::size_t sent = 0;
    pollfd ends[3] = {{in[1], POLLOUT, 0}, {out[0], POLLIN, 0}, {err[0], POLLIN, 0}};
    const auto shut = [&](pollfd& end) {
        close(end.fd);
        end.fd = -1;
    };
    if (input.empty()) shut(ends[0]);
    while (ends[0].fd >= 0 || ends[1].fd >= 0 || ends[2].fd >= 0) {
        if (poll(ends, 3, -1) < 0 && errno != EINTR) break;
        if (ends[0].fd >= 0 && ends[0].revents) {
            const ssize_t written = ::write(ends[0].fd, input.data() + sent, input.size() - sent);
            if (written > 0) sent += static_cast<std::size_t>(written);
            if (written < 0 || sent == input.size()) shut(ends[0]);
        }
        for (int k : {1, 2}) {
            if (ends[k].fd < 0 || !ends[k].revents) continue;
            char buffer[65536];
            const ssize_t got = ::read(ends[k].fd, buffer, sizeof buffer);
            if (got > 0)
                (k == 1 ? answer.out : answer.err).append(buffer, static_cast<std::size_t>(got));
            else
                shut(ends[k]);
        }
    }
    int status = 0;
    while (waitpid(child, &status, 0) < 0 && errno == EINTR) {}
    answer.status = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
    return answer;
}

std::string source_path(const std::string& name) { return std::string(BINWRIGHT_SOURCE) + "/" + name; }

std::string source_file(const std::string& name) {
    std::ifstream file(source_path(name), std::ios::binary);
    if (!file) throw std::runtime_error("no file " + source_path(name));
    return {std::istreambuf_iterator<char>(file), {}};
}

}  // namespace binwright::testing
