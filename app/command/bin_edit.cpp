// SPDX-License-Identifier: GPL-3.0-or-later
// `bin edit`: what is on record of a lot, or of a part type.
#include <algorithm>

#include "app/command/bin.hpp"
#include "app/command/list.hpp"
#include "app/command/text.hpp"

namespace binwright {
namespace {

InputError fault(std::string field, std::string message, std::string expected) {
    return InputError(Fault{{}, std::move(field), std::move(message), std::move(expected)});
}

constexpr const char* kOfLots[] = {"--count", "--place", "--origin", "--date-code", "--donor", "--note", "--set-aside", "--count-again"};
constexpr const char* kOfTypes[] = {"--name", "--figure", "--attribute", "--known"};

Edit type_edit(const Session& session, const Call& call, const PartRecord& before) {
    for (const char* option : kOfLots)
        if (call.has(option)) throw fault(option, "\"" + before.part.name + "\" is a type, and " + option + " belongs to a lot", "the label of a lot");
    PartRecord after = before;
    const Family family = after.part.family;
    const std::string how = call.text("--known").value_or("told");
    const std::optional<Known> known = find_known(how);
    if (!known || known == Known::measured) throw fault("--known", "--known cannot be \"" + how + "\"; it is marked, datasheet, told or kind", "marked, datasheet, told or kind");
    if (const auto name = call.text("--name")) after.part.name = *name;
    std::vector<Figure> given;
    for (const std::string& text : call.list("--figure")) {
        const NamedText pair = named_text("--figure", text);
        if (const auto symbol = find_symbol(pair.name, family); symbol && pair.text.empty()) {
            std::erase_if(after.part.figures, [&](const Figure& figure) { return figure.symbol == *symbol; });
            continue;
        }
        const Figure figure = figure_of("--figure", text, family, *known);
        if (*known == Known::kind && info(figure.symbol).rating)
            throw fault(std::string(info(figure.symbol).name), std::string(info(figure.symbol).name) + " is a rating: it is printed or published, never typical of a kind", "marked, datasheet or told");
        given.push_back(figure);
    }
    // A figure under the same conditions takes the place of the old one; under others it stands beside it.
    for (const Figure& figure : given) {
        std::erase_if(after.part.figures, [&](const Figure& old) { return old.symbol == figure.symbol && old.at == figure.at; });
        after.part.figures.push_back(figure);
    }
    for (const std::string& text : call.list("--attribute")) {
        const NamedText pair = named_text("--attribute", text);
        if (pair.text.empty())
            after.part.attributes.erase(pair.name);
        else
            after.part.attributes.insert_or_assign(pair.name, attribute_of("--attribute", text, family).second);
    }
    refuse_implausible(session, after.part, given, "--figure");
    Edit edit{"edit the type " + before.part.name, {}};
    if (!(after == before)) edit.changes.emplace_back(Change<PartRecord>{before, after});
    return edit;
}

Edit lot_edit(const Call& call, const Store& store, const LotRecord& before) {
    for (const char* option : kOfTypes)
        if (call.has(option))
            throw fault(option, std::string(option) + " belongs to a type: bin edit \"" + part_of(store, before).part.name + "\" …; what was measured on the lot: bin measure", "the name of a type");
    LotRecord after = before;
    const auto take = [&](const char* option, std::string& into) {
        if (const auto text = call.text(option)) into = *text;
    };
    if (const auto count = call.whole("--count", 0, 1000000)) after.count = *count;
    take("--place", after.place);
    take("--date-code", after.date_code);
    take("--donor", after.donor);
    take("--note", after.note);
    if (const auto origin = call.text("--origin")) after.origin = origin_of(*origin);
    Edit edit{"edit " + lot_label(before.number), {}};
    if (!(after == before)) edit.changes.emplace_back(Change<LotRecord>{before, after});
    const std::vector<ReadingRecord> readings = store.readings(before.id);
    for (const bool aside : {true, false}) {
        const char* option = aside ? "--set-aside" : "--count-again";
        const auto number = call.whole(option, 1, 2000000000);
        if (!number) continue;
        const auto found = std::ranges::find(readings, static_cast<std::int64_t>(*number), &ReadingRecord::id);
        if (found == readings.end()) throw fault(option, lot_label(before.number) + " has no reading no. " + std::to_string(*number) + "; `binwright bin show` lists them", "the number of a reading");
        if (found->set_aside == aside) continue;
        ReadingRecord changed = *found;
        changed.set_aside = aside;
        edit.changes.emplace_back(Change<ReadingRecord>{*found, changed});
    }
    return edit;
}

int run(Session& session, const Call& call) {
    const std::string name = *call.text("LABEL");
    const auto given = [&](const char* option) { return call.has(option); };
    if (std::ranges::none_of(kOfLots, given) && std::ranges::none_of(kOfTypes, given))
        throw fault("", "nothing is said to change; see `binwright bin edit --help`", "an option such as --place");
    return change_bin(session, "bin edit", false, [&](const Store& store) {
        if (const std::optional<PartRecord> type = store.part_named(name)) return type_edit(session, call, *type);
        return lot_edit(call, store, lot_of(store, name));
    });
}

}  // namespace

Command bin_edit_command() {
    return {.name = "bin edit",
            .summary = "change what is on record of a lot, or of a part type",
            .about = "",
            .options = {{"LABEL", "LABEL|TYPE", "a lot's label, or the name of a type", false, true},
                        {"--count", "N", "pieces of the lot"},
                        {"--place", "PATH", "where it lies"},
                        {"--origin", "WHICH", "new, surplus or pulled"},
                        {"--date-code", "TEXT", "as printed"},
                        {"--donor", "TEXT", "what it was pulled from"},
                        {"--note", "TEXT", "anything else"},
                        {"--set-aside", "NO", "a reading (numbered by bin show) that is not to count"},
                        {"--count-again", "NO", "a reading that was set aside"},
                        {"--name", "TEXT", "of a type: another name"},
                        {"--figure", "SYMBOL=VALUE", "of a type: a figure, in place of one under the same conditions; SYMBOL= removes it", true},
                        {"--attribute", "NAME=VALUE", "of a type; NAME= removes it", true},
                        {"--known", "HOW", "how these figures are known: marked, datasheet, told (else) or kind"},
                        {"--sure", "", "store a value that such a part hardly has"}},
            .example = "binwright --bin demo bin edit 101 --place \"Shed / A4\" --dry-run",
            .example_says = "what moving the demo bin's first lot would change",
            .run = run};
}

}  // namespace binwright
