// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/command/session.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <iterator>
#include <memory>
#include <nlohmann/json.hpp>

#include "app/command/text.hpp"
#include "engine/embedded.hpp"
#include "import/starter.hpp"

namespace binwright {

std::span<const EmbeddedFile> demo_files();  // written by the build from app/demo

namespace {

namespace fs = std::filesystem;

InputError call_error(std::string file, std::string field, std::string message, std::string expected = {}) {
    return InputError(Fault{{std::move(file), 0, 0}, std::move(field), std::move(message), std::move(expected)});
}

[[noreturn]] void cannot_write(const std::string& path, int why) {
    const std::string message = std::string("cannot be written: ") + std::strerror(why);
    if (why == ENOENT || why == ENOTDIR || why == EISDIR || why == EACCES || why == EROFS)
        throw call_error(path, "", message, "a file that can be written");
    throw std::runtime_error(path + ": " + message);
}

bool exists(const std::string& path) {
    std::error_code ignored;
    return fs::exists(path, ignored);
}

/// The value of `title = "…"` without reading the whole file as a converter.
std::string title_line(std::string_view text) {
    for (std::size_t at = 0; at < text.size();) {
        const std::size_t end = std::min(text.find('\n', at), text.size());
        const std::string_view line = text.substr(at, end - at);
        if (line.starts_with("title")) return std::string(line);
        if (line.starts_with('[')) break;
        at = end + 1;
    }
    return {};
}

bool has_demo_title(const ConverterText& converter) {
    const std::string title = title_line(converter.text);
    for (const EmbeddedFile& demo : demo_files())
        if (!title.empty() && title_line(demo.text) == title) return true;
    return false;
}

}  // namespace

void note(Session& session, const std::string& text) {
    if (session.quiet) return;
    if (session.json)
        session.notes.push_back(text);
    else
        session.err << text << '\n';
}

std::string read_text(Session& session, const std::string& path) {
    if (path == "-") {
        std::string text(std::istreambuf_iterator<char>(session.in), {});
        if (session.in.bad()) throw std::runtime_error("standard input cannot be read");
        return text;
    }
    struct stat status {};
    if (stat(path.c_str(), &status) != 0) throw call_error(path, "", std::string("cannot be read: ") + std::strerror(errno), "a file");
    if (S_ISDIR(status.st_mode)) throw call_error(path, "", "cannot be read: it is a folder", "a file");
    std::ifstream file(path, std::ios::binary);
    if (!file) throw call_error(path, "", std::string("cannot be read: ") + std::strerror(errno), "a file");
    std::string text(std::istreambuf_iterator<char>(file), {});
    if (file.bad()) throw std::runtime_error(path + ": cannot be read to its end");
    return text;
}

void write_text(Session& session, const std::string& path, const std::string& text, bool replace) {
    if (path == "-") {
        session.out << text;
        return;
    }
    if (exists(path) && fs::is_directory(path)) cannot_write(path, EISDIR);
    const bool plain = !exists(path) || fs::is_regular_file(path);  // a device or a pipe is written to as it is
    if (!replace && plain && exists(path))
        throw call_error(path, "", "is there already and is left as it is (add --sure to replace it)", "a new file");
    const std::string beside = plain ? path + ".part" : path;
    const int file = open(beside.c_str(), O_WRONLY | O_CREAT | (plain ? O_TRUNC : 0) | O_CLOEXEC, 0666);
    if (file < 0) cannot_write(path, errno);
    const auto give_up = [&](int why) {  // not a matter of the call: the disk
        close(file);
        if (plain) unlink(beside.c_str());
        cannot_write(path, why);
    };
    for (std::size_t done = 0; done < text.size();) {
        const ssize_t written = ::write(file, text.data() + done, text.size() - done);
        if (written < 0 && errno == EINTR) continue;
        if (written < 0) give_up(errno);
        done += static_cast<std::size_t>(written);
    }
    if (plain && fsync(file) != 0) give_up(errno);
    close(file);
    if (plain && rename(beside.c_str(), path.c_str()) != 0) {
        const int why = errno;
        unlink(beside.c_str());
        cannot_write(path, why);
    }
}

void print_json(Session& session, const std::string& command, const Json& body) {
    Json answer = {{"format", 1}, {"command", command}};
    for (const auto& [key, value] : body.items()) answer[key] = value;
    if (!session.notes.empty()) answer["notes"] = session.notes;
    session.out << answer.dump(2, ' ', false, Json::error_handler_t::replace) << '\n';
}

bool is_demo_converter(const ConverterText& converter) {
    std::error_code failed;
    const fs::path path = fs::weakly_canonical(converter.path, failed);
    const bool demo_folder = !failed && path.parent_path().filename() == "demo" && path.parent_path().parent_path().filename() == "app";
    for (const EmbeddedFile& demo : demo_files())
        if (demo.text == converter.text || (demo_folder && path.filename() == std::string(demo.name))) return true;
    return false;
}

OpenBin bin_in_memory(bool demo) {
    OpenBin bin{Store(":memory:"), demo ? "the demo bin" : "the starter part types", false};
    (void)bin.store.apply(starter_edit(bin.store));
    if (demo) (void)bin.store.apply(demo_edit(bin.store));
    return bin;
}

OpenBin bin_for_reading(Session& session, const ConverterText* converter) {
    if (session.bin == "demo") return bin_in_memory(true);
    if (session.bin) {
        if (!exists(*session.bin)) throw call_error(*session.bin, "--bin", "there is no such bin; `binwright bin add` makes one", "the path of a bin file, or demo");
        return {Store(*session.bin, Store::Open::read_only), *session.bin, true};
    }
    const char* named = std::getenv("BINWRIGHT_BIN");
    if (named && std::string_view(named) == "demo") return bin_in_memory(true);
    const std::string own = default_bin_path();
    const bool there = exists(own);
    if (converter && !(named && *named && there) && (is_demo_converter(*converter) || (!there && has_demo_title(*converter)))) {
        note(session, there ? "using the demo bin (in memory); for your own bin: --bin " + own
                            : "using the demo bin (in memory); your own bin does not exist yet");
        return bin_in_memory(true);
    }
    if (there) return {Store(own, Store::Open::read_only), own, true};
    note(session, "there is no bin at " + own + " yet: only the starter part types are known");
    return bin_in_memory(false);
}

Rulebook rulebook_for(Session& session) {
    if (!session.rulebook) return rulebooks().front();
    if (const Rulebook* shipped = find_rulebook(*session.rulebook)) return *shipped;
    const std::size_t colon = session.rulebook->rfind(':');
    const std::string path = session.rulebook->substr(0, exists(*session.rulebook) ? std::string::npos : colon);
    if (path != "-" && !exists(path)) {
        std::vector<std::string> names;
        for (const Rulebook& book : rulebooks()) names.push_back(book.name);
        const std::string near = nearest_word(*session.rulebook, names);
        throw call_error("", "--rulebook", "there is no rulebook \"" + *session.rulebook + "\", neither shipped nor as a file" +
                                               (near.empty() ? "; see `binwright rulebook list`" : "; did you mean \"" + near + "\"?"),
                         "the name of a shipped rulebook or the path of a file");
    }
    return rulebook_from(session, *session.rulebook);
}

Rulebook rulebook_from(Session& session, const std::string& named) {
    const std::size_t colon = exists(named) ? std::string::npos : named.rfind(':');
    const std::string path = named.substr(0, colon), level = colon == std::string::npos ? "" : named.substr(colon + 1);
    // Books below it: shipped ones by name, else files beside it; each is kept until the one above is read.
    std::vector<std::unique_ptr<Rulebook>> below;
    std::vector<std::string> open = {path};
    FindBook find = [&](const std::string& name) -> const Rulebook* {
        if (const Rulebook* shipped = find_rulebook(name)) return shipped;
        const std::string beside = (fs::path(path).parent_path() / name).string();
        for (const std::string& file : {beside, beside + ".toml"}) {
            std::error_code failed;
            if (!fs::is_regular_file(file, failed)) continue;
            if (std::find(open.begin(), open.end(), file) != open.end()) throw call_error(file, "based_on", "the rulebook is based on itself", "another rulebook");
            open.push_back(file);
            below.push_back(std::make_unique<Rulebook>(read_rulebook(read_text(session, file), file, {}, find)));
            return below.back().get();
        }
        return nullptr;
    };
    return read_rulebook(read_text(session, path), path, level, find);
}

namespace {

/// What is wrong with one fitted name, as a fault at its place; empty when the bin, or the file itself, has the part.
std::optional<Fault> not_found(Session& session, const OpenBin& bin, Seat seat, const SeatConfig& config, const FittedConfig& fitted) {
    std::string why = "\"" + fitted.lot + "\" is neither a lot nor a part type of the bin (" + bin.name + ")" +
                      (bin.on_disk ? "; the demo's lots are in a bin of their own: --bin demo" : "");
    const Lot* carried = nullptr;
    for (const Lot& lot : config.as_fitted)
        if (lot.label == fitted.lot || lot.part.name == fitted.lot) carried = &lot;
    try {
        if (const std::optional<Lot> found = bin.store.engine_lot(fitted.lot)) {
            // A label is a running number of one bin: in another bin it may be on something else.
            if (carried && carried->part.name != found->part.name)
                note(session, to_string(Fault{fitted.place, "", fitted.lot + " in this bin (" + bin.name + ") is " + found->part.name + ", and the file was saved with " +
                                                                    carried->part.name + "; judged is the bin's", ""}));
            return std::nullopt;
        }
    } catch (const EditRefused& refused) {
        why = std::string(refused.what()) + " (bin: " + bin.name + ")";
    }
    if (carried) return std::nullopt;
    return Fault{fitted.place, "seat." + std::string(to_string(seat)) + ".fitted", why, "a lot label or the name of a part type"};
}

}  // namespace

Job job_for(Session& session, const std::string& path, bool needs_bin) {
    const ConverterText text{path, read_text(session, path)};
    Converter converter = read_converter(text.text, path, session.with);
    Job job;
    for (const auto& [seat, config] : converter.seats) needs_bin = needs_bin || !config.fitted.empty();
    if (needs_bin) job.bin = bin_for_reading(session, &text);
    std::vector<Fault> faults;
    for (const auto& [seat, config] : converter.seats)
        for (const FittedConfig& fitted : config.fitted)
            if (const std::optional<Fault> fault = not_found(session, *job.bin, seat, config, fitted)) faults.push_back(*fault);
    if (!faults.empty()) throw InputError(faults);
    job.setup = assemble(std::move(converter), [&](const std::string& name) -> std::optional<Lot> {
        try {
            return job.bin->store.engine_lot(name);
        } catch (const EditRefused&) {
            return std::nullopt;  // a saved file carries its figures
        }
    });
    return job;
}

Seat seat_of(const Converter& converter, const std::string& text) {
    std::string name = text;
    for (char& c : name) c = c == '-' || c == ' ' ? '_' : c;
    std::optional<Seat> seat = find_seat(name);
    std::vector<std::string> names;
    std::string list;
    for (const Seat each : kSeats)
        if (has_seat(*converter.topology, each)) {
            names.emplace_back(to_string(each));
            list += (list.empty() ? "" : ", ") + names.back();
            if (!seat && converter.reference(each) == text) seat = each;
        }
    if (seat && has_seat(*converter.topology, *seat)) return *seat;
    const std::string near = nearest_word(name, names);
    throw call_error(converter.file, "SEAT", "this " + std::string(converter.topology->name) + " has no seat \"" + text + "\"" +
                                                 (near.empty() ? "; its seats: " + list : "; did you mean \"" + near + "\"?"),
                     "one of " + list);
}

}  // namespace binwright
