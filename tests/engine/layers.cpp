// SPDX-License-Identifier: GPL-3.0-or-later
// The rooms and the arrow between them: app → import → catalog → engine. Read off the #include lines of every source.
#include <algorithm>
#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <set>
#include <string>
#include <vector>

namespace fs = std::filesystem;

namespace {

const fs::path kSource = BINWRIGHT_SOURCE;

struct Include {
    fs::path file;  ///< relative to the source tree
    int line;
    std::string what;
};

bool has_suffix(const fs::path& file, std::initializer_list<const char*> suffixes) {
    return std::any_of(suffixes.begin(), suffixes.end(),
                       [&](const char* suffix) { return file.extension() == suffix; });
}

std::vector<fs::path> files_under(const std::string& folder, std::initializer_list<const char*> suffixes) {
    std::vector<fs::path> files;
    if (!fs::exists(kSource / folder)) return files;
    for (const auto& entry : fs::recursive_directory_iterator(kSource / folder)) {
        const auto relative = fs::relative(entry.path(), kSource);
        if (entry.is_regular_file() && has_suffix(entry.path(), suffixes)) files.push_back(relative);
    }
    std::sort(files.begin(), files.end());
    return files;
}

std::vector<Include> includes_under(const std::string& folder) {
    std::vector<Include> includes;
    for (const auto& file : files_under(folder, {".hpp", ".cpp", ".h", ".cc"})) {
        std::ifstream stream(kSource / file);
        int number = 0;
        for (std::string line; std::getline(stream, line);) {
            ++number;
            const auto hash = line.find_first_not_of(" \t");
            if (hash == std::string::npos || line[hash] != '#') continue;
            const auto word = line.find_first_not_of(" \t", hash + 1);
            if (word == std::string::npos || line.compare(word, 7, "include") != 0) continue;
            const auto open = line.find_first_of("\"<", word);
            const auto close = open == std::string::npos ? open : line.find_first_of("\">", open + 1);
            if (close == std::string::npos) continue;
            includes.push_back({file, number, line.substr(open + 1, close - open - 1)});
        }
    }
    return includes;
}

bool begins(const std::string& text, const std::string& with) {
    return text.rfind(with, 0) == 0;
}

bool is_qt(const std::string& what) {
    return (what.size() > 1 && what[0] == 'Q' && what[1] >= 'A' && what[1] <= 'Z') || begins(what, "Qt") ||
           begins(what, "qt") || what == "qcustomplot.h";
}
bool is_sqlite(const std::string& what) {
    return begins(what, "SQLiteCpp") || begins(what, "sqlite3");
}
bool is_file_access(const std::string& what) {
    return what == "fstream" || what == "filesystem" || what == "cstdio" || what == "stdio.h" || what == "unistd.h" ||
           what == "fcntl.h";
}
bool is_toml(const std::string& what) {
    return begins(what, "toml");
}

/// The folders of the project that a file includes from, by the first part of the path.
std::string room(const std::string& what) {
    const auto slash = what.find('/');
    const std::string first = slash == std::string::npos ? "" : what.substr(0, slash);
    static const std::set<std::string> rooms{"app", "import", "catalog", "engine", "tests"};
    return rooms.count(first) ? first : "";
}

void keep_out(const std::string& folder, const std::set<std::string>& may_use,
              const std::vector<bool (*)(const std::string&)>& banned) {
    const auto includes = includes_under(folder);
    for (const auto& include : includes) {
        INFO(include.file.string() << ':' << include.line << " includes " << include.what);
        const auto from = room(include.what);
        CHECK((from.empty() || may_use.count(from) == 1));
        CHECK(include.what.find("..") == std::string::npos);
        for (const auto test : banned) CHECK_FALSE(test(include.what));
    }
}

}  // namespace

TEST_CASE("the engine knows no Qt, no SQLite, no files, and no other room", "[layers]") {
    REQUIRE_FALSE(includes_under("engine").empty());
    keep_out("engine", {"engine"}, {is_qt, is_sqlite, is_file_access});
}

TEST_CASE("the catalog knows the engine, no Qt and no TOML", "[layers]") {
    REQUIRE_FALSE(includes_under("catalog").empty());
    keep_out("catalog", {"engine", "catalog"}, {is_qt, is_toml});
}

TEST_CASE("import knows engine and catalog, and no Qt", "[layers]") {
    keep_out("import", {"engine", "catalog", "import"}, {is_qt});
}

TEST_CASE("nothing includes the tests, and only the app includes the app", "[layers]") {
    keep_out("app", {"engine", "catalog", "import", "app"}, {});
}

TEST_CASE("integration in time, the reference of the solver, uses nothing of the engine", "[layers]") {
    for (const auto& include : includes_under("tests/reference"))
        if (begins(include.file.filename().string(), "time_domain") ||
            begins(include.file.filename().string(), "topologies") ||
            begins(include.file.filename().string(), "case_table")) {
            INFO(include.file.string() << ':' << include.line << " includes " << include.what);
            CHECK_FALSE(begins(include.what, "engine/"));
        }
}

TEST_CASE("every source says its licence in its first lines", "[layers]") {
    int seen = 0;
    for (const char* folder : {"app", "engine", "catalog", "import", "tests"}) {
        auto files = files_under(folder, {".hpp", ".cpp", ".h", ".cmake"});
        for (const auto& file : files_under(folder, {".txt"}))
            if (file.filename() == "CMakeLists.txt") files.push_back(file);
        for (const auto& file : files) {
            std::ifstream stream(kSource / file);
            std::string line;
            bool found = false;
            for (int k = 0; k < 3 && std::getline(stream, line); ++k)
                found = found || line.find("SPDX-License-Identifier: GPL-3.0-or-later") != std::string::npos;
            INFO(file.string());
            CHECK(found);
            ++seen;
        }
    }
    CHECK(seen > 20);
}

TEST_CASE("the top level holds the rooms and three files, and nothing else", "[layers]") {
    // build/ is where ./app/run and ./tests/run build; git ignores it.
    const std::set<std::string> allowed{"CMakeLists.txt", "README.md", "DEVELOPERS.md", "app",  "engine",
                                        "catalog",        "tests",     "import",        "build"};
    for (const auto& entry : fs::directory_iterator(kSource)) {
        const auto name = entry.path().filename().string();
        INFO(name);
        CHECK((name[0] == '.' || allowed.count(name) == 1));
    }
}
