// SPDX-License-Identifier: GPL-3.0-or-later
// Help: every command has it, and the example in it works as it stands.
#include <catch2/catch.hpp>
#include <filesystem>
#include <sstream>

#include "app/command/call.hpp"
#include "tests/app/command/program.hpp"

using namespace binwright;
using namespace binwright::testing;

namespace {

/// The example of a help text, its folded lines joined as a shell joins them.
std::string example_in(const std::string& help) {
    std::istringstream lines(help);
    std::string line, call;
    while (std::getline(lines, line)) {
        if (call.empty() && !line.starts_with("example: ")) continue;
        line = line.substr(9);
        const bool more = line.ends_with(" \\");
        call += more ? line.substr(0, line.size() - 1) : line;
        if (!more) break;
    }
    return call;
}

/// A folder as a user has it in front of them: the demo and the house rulebook at their places, and a bin of their own.
struct SourceFolder : Folder {
    SourceFolder() {
        for (const char* name : {"app/demo/tide-gauge.toml", "engine/rule/rulebooks/house.toml"}) write(name, source_file(name));
        std::filesystem::create_directories(path("programs"));
        std::filesystem::create_symlink(BINWRIGHT_PROGRAM, path("programs/binwright"));
        environment["PATH"] = path("programs").string() + ":/usr/bin:/bin";
    }
};

}  // namespace

TEST_CASE("every command's example works as it stands", "[app][help]") {
    for (const Command& command : commands()) {
        const SourceFolder folder;
        if (command.name == "bin redo") {  // its example needs something that was taken back
            REQUIRE(folder.run({"bin", "add", "switch", "a switch"}).status == 0);
            REQUIRE(folder.run({"bin", "undo"}).status == 0);
        }
        std::istringstream words(command.name);
        std::vector<std::string> call;
        for (std::string word; words >> word;) call.push_back(word);
        call.push_back("--help");
        const Answer help = folder.run(call);
        CHECK(help.status == 0);
        CHECK(help.err.empty());
        CHECK(help.out.starts_with("binwright " + command.name));
        const std::string example = example_in(help.out);
        INFO(command.name << ": " << example);
        REQUIRE(example.starts_with("binwright "));
        CHECK(example == command.example);
        const Answer answer = folder.start({"/bin/sh", "-c", example});
        INFO(answer.out << answer.err);
        const bool judges = command.name == "check" || command.name == "rank" || command.name == "stress";
        CHECK((answer.status == 0 || (judges && (answer.status == 1 || answer.status == 3))));
    }
}

TEST_CASE("the program's help lists every command, and its example works", "[app][help]") {
    const SourceFolder folder;
    const Answer help = folder.run({"--help"});
    CHECK(help.status == 0);
    for (const Command& command : commands()) CHECK(help.out.find("  " + command.name + " ") != std::string::npos);
    const Answer answer = folder.start({"/bin/sh", "-c", example_in(help.out)});
    CHECK(answer.status != 2);
    CHECK(answer.status != 4);
    CHECK(folder.run({"-h"}).out == help.out);
    CHECK(folder.run({"help"}).out == help.out);
    CHECK(folder.run({"help", "bin", "add"}).out == folder.run({"bin", "add", "-h"}).out);
    CHECK(folder.run({"help", "bin"}).out == folder.run({"bin", "--help"}).out);
    CHECK(folder.run({"--version"}).out.starts_with("binwright "));
}

TEST_CASE("no line of any help is wider than a terminal", "[app][help]") {
    const Folder folder;
    std::string all = folder.run({"--help"}).out + folder.run({"help", "figures"}).out;
    for (const Command& command : commands()) all += help_text(&command);
    std::istringstream lines(all);
    for (std::string line; std::getline(lines, line);) {
        INFO(line);
        long characters = 0;
        for (const char c : line) characters += (c & 0xC0) != 0x80;
        CHECK(characters <= 100);
    }
}

TEST_CASE("help figures names every symbol in both spellings with its unit and its usual conditions", "[app][help]") {
    const Folder folder;
    const Answer answer = folder.run({"help", "figures", "--json"});
    REQUIRE(answer.status == 0);
    const nlohmann::json figures = answer.json().at("figures");
    CHECK(figures.size() == 30);  // the table of symbols in the contract of files and commands: 12 + 8 + 3 + 7
    bool seen = false;
    for (const auto& row : figures)
        if (row.at("symbol") == "ESR") {
            seen = true;
            CHECK(row.at("usual") == nlohmann::json{{"frequency", 1e5}, {"temperature", 20.0}});
        }
    CHECK(seen);
    const std::string text = folder.run({"help", "figures"}).out;
    for (const char* line : {"  R_DS(on)   Rdson  Ω     10 V              on-state resistance", "  I_R~       Iripple  A     120 Hz, 105 °C    ripple current rating"})
        CHECK(text.find(line) != std::string::npos);
}
