// SPDX-License-Identifier: GPL-3.0-or-later
// The program as a child process, in a folder and a home of its own that go when the test is over.
#pragma once
#include <filesystem>
#include <map>
#include <nlohmann/json.hpp>
#include <string>
#include <vector>

namespace binwright::testing {

struct Answer {
    int status = -1;  ///< exit status; 128 + signal when it was killed
    std::string out, err;
    [[nodiscard]] nlohmann::json json() const { return nlohmann::json::parse(out); }
    [[nodiscard]] nlohmann::json errors() const { return nlohmann::json::parse(err).at("errors"); }
};

class Folder {
  public:
    Folder();
    ~Folder();
    Folder(const Folder&) = delete;
    Folder& operator=(const Folder&) = delete;

    [[nodiscard]] std::filesystem::path path(const std::string& name = {}) const;
    /// Writes a file in the folder and returns its name.
    std::string write(const std::string& name, const std::string& text) const;
    [[nodiscard]] std::string read(const std::string& name) const;
    /// Every file below the folder, with its size, sorted: what is there and what is not.
    [[nodiscard]] std::vector<std::string> files() const;

    /// Runs binwright here. The bin is `own bin.binwright` in this folder through BINWRIGHT_BIN unless changed.
    [[nodiscard]] Answer run(const std::vector<std::string>& arguments, const std::string& input = {}) const;
    /// Runs any program here.
    [[nodiscard]] Answer start(const std::vector<std::string>& call, const std::string& input = {}) const;

    std::map<std::string, std::string> environment;

  private:
    std::filesystem::path path_;
};

/// Whole contents of a file of the source, e.g. "app/demo/tide-gauge.toml".
[[nodiscard]] std::string source_file(const std::string& name);
[[nodiscard]] std::string source_path(const std::string& name);

}  // namespace binwright::testing
