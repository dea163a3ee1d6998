// SPDX-License-Identifier: GPL-3.0-or-later
// A rulebook's text into rules: every fault at once, each with its line and column and what was expected there.
#include <algorithm>
#include <cmath>
#include <tuple>

#include "engine/converter/keys.hpp"
#include "engine/rule/reading.hpp"

namespace binwright {
namespace {

const std::vector<std::string> kTopKeys = {"kind", "format", "name", "title", "source", "based_on", "without", "levels", "level", "allowances", "rule"};
const std::vector<std::string> kRuleKeys = {"id",         "title",     "for",     "where",     "charged_by", "at_levels", "stress", "rating",
                                            "rated_at",   "requirement", "at_most", "below",   "at_least",   "over",      "lower_of", "greater_of",
                                            "permitted",  "covered",   "instead_of", "why",    "source",     "clause",    "known",  "reading"};
const std::vector<std::string> kKnown = {"seen", "seen, secondary", "from memory", "common practice"};

struct AllowanceKey {
    std::string_view key;
    Unit unit;
    double lowest, highest;
    double Allowances::*slot;
};
constexpr AllowanceKey kAllowances[] = {
    {"switch_overshoot", Unit::fraction, 0, 5, &Allowances::switch_overshoot},
    {"rectifier_overshoot", Unit::fraction, 0, 5, &Allowances::rectifier_overshoot},
    {"sharing", Unit::fraction, 0, 1, &Allowances::sharing},
    {"aged_capacitance", Unit::fraction, 0.01, 1, &Allowances::aged_capacitance},
    {"aged_esr", Unit::none, 1, 100, &Allowances::aged_esr},
    {"measurement_expiry", Unit::second, 0, 100 * 365.25 * 86400, &Allowances::measurement_expiry},
};

std::vector<std::string> technologies(Family family) {
    for (const AttributeInfo& attribute : attributes())
        if (attribute.name == "technology" && (attribute.families & bit(family))) return split_words(attribute.words);
    return {};
}

bool has_stress(const StressRow& row, std::optional<Family> family) {
    if (!family) return row.of_converter;
    switch (*family) {
        case Family::switch_: return row.in_switch;
        case Family::rectifier: return row.in_rectifier;
        case Family::capacitor: return row.in_capacitor;
        default: return std::find(row.beside.begin(), row.beside.end(), *family) != row.beside.end();
    }
}

class Reader {
  public:
    Reader(const std::string& file, const std::string& level, const FindBook& find, bool whole, std::vector<Fault>& faults)
        : reading_{faults, whole, {}, level, {}}, find_(find) {
        book_.stem = stem(file);
    }

    Rulebook run(const Item& root) {
        if (const Item* item = root.find("levels")) levels(*item);
        usual_level(root);
        if (const Item* item = root.find("based_on")) base(*item);
        for (const Member& member : root.members) {
            const Item& item = member.value;
            if (member.key == "kind") {
                if (item.kind != Item::Kind::text || item.text != "rulebook") reading_.fault(item, "kind", "this file is not a rulebook", "kind = \"rulebook\"");
            } else if (member.key == "format") {
                if (item.kind != Item::Kind::integer || item.number != 1) reading_.fault(item, "format", "this program reads rulebooks of format 1", "format = 1");
            } else if (member.key == "name") {
                if (const auto text = reading_.text_of(item, "name")) book_.stem = *text;
            } else if (member.key == "title") {
                if (const auto text = reading_.text_of(item, "title")) book_.title = *text;
            } else if (member.key == "source") {
                if (const auto text = reading_.text_of(item, "source")) book_.text_source = *text;
            } else if (member.key == "without") {
                without(item);
            } else if (member.key == "allowances") {
                allowances(item);
            } else if (member.key == "rule") {
                rules(item);
            } else if (member.key != "levels" && member.key != "level" && member.key != "based_on") {
                reading_.unknown(member, "", kTopKeys);
            }
        }
        if (reading_.whole && !root.find("kind")) reading_.fault(root, "kind", "the file does not say what it is", "kind = \"rulebook\"");
        if (reading_.whole && !root.find("format")) reading_.fault(root, "format", "the file does not say its format", "format = 1");
        if (reading_.whole && !root.find("rule") && !root.find("based_on") && !reading_.misspelt.contains("rule"))
            reading_.fault(root, "rule", "the rulebook has no rule", "a table [[rule]] for each rule");
        finish();
        return std::move(book_);
    }

  private:
    static std::string stem(const std::string& file) {
        const auto slash = file.find_last_of("/\\");
        std::string name = slash == std::string::npos ? file : file.substr(slash + 1);
        if (name.ends_with(".toml")) name.resize(name.size() - 5);
        return name;
    }

    void levels(const Item& item) {
        book_.levels = reading_.texts_of(item, "levels");
        for (const std::string& one : book_.levels)
            if (one.find_first_of(": \t,") != std::string::npos) reading_.fault(item, "levels", "a level is one word, and " + ticked(one) + " is not", "levels = [\"I\", \"II\", \"III\"]");
        reading_.levels = book_.levels;
    }

    void usual_level(const Item& root) {
        if (!book_.levels.empty()) book_.usual_level = book_.levels.front();
        if (const Item* item = root.find("level"))
            if (const auto text = reading_.text_of(*item, "level")) {
                if (std::find(book_.levels.begin(), book_.levels.end(), *text) == book_.levels.end())
                    reading_.fault(*item, "level", book_.levels.empty() ? "`level` names a level, and the rulebook has no `levels`" : "there is no level " + ticked(*text),
                                   book_.levels.empty() ? "levels = [\"I\", \"II\", \"III\"]" : "one of " + listed(book_.levels));
                else
                    book_.usual_level = *text;
            }
        if (reading_.level.empty()) {
            reading_.level = book_.usual_level;
        } else if (std::find(book_.levels.begin(), book_.levels.end(), reading_.level) == book_.levels.end()) {
            const Item* item = root.find("levels");
            reading_.fault(item ? *item : root, "levels", "the rulebook has no level " + ticked(reading_.level), book_.levels.empty() ? "none" : "one of " + listed(book_.levels));
        }
        book_.level = reading_.level;
    }

    void base(const Item& item) {
        const auto name = reading_.text_of(item, "based_on");
        if (!name) return;
        const Rulebook* below = find_ ? find_(*name) : find_rulebook(*name);
        if (!below) {
            std::vector<std::string> names;
            if (!find_)
                for (const Rulebook& book : rulebooks()) names.push_back(book.name);
            const std::string near = nearest_word(*name, names);
            return reading_.fault(item, "based_on", "there is no rulebook " + ticked(*name) + " to build on" + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                                  names.empty() ? "the name of a rulebook" : "one of " + listed(names));
        }
        book_.based_on = *name;
        book_.allowances = below->allowances;
        book_.rules = below->rules;
        for (Rule& rule : book_.rules)
            if (rule.book.empty()) rule.book = below->name;
    }

    Rule* inherited(const std::string& id) {
        for (Rule& rule : book_.rules)
            if (rule.id == id && !rule.book.empty()) return &rule;
        return nullptr;
    }

    std::vector<std::string> ids() const {
        std::vector<std::string> out;
        for (const Rule& rule : book_.rules) out.push_back(rule.id);
        return out;
    }

    void without(const Item& item) {
        if (book_.based_on.empty()) return reading_.fault(item, "without", "`without` leaves out rules of the rulebook below, and there is none", "based_on = \"house\"");
        for (const std::string& id : reading_.texts_of(item, "without")) {
            const std::string near = nearest_word(id, ids());
            if (std::erase_if(book_.rules, [&](const Rule& rule) { return rule.id == id && !rule.book.empty(); }) == 0)
                reading_.fault(item, "without", book_.based_on + " has no rule " + ticked(id) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"));
        }
    }

    void allowances(const Item& table) {
        if (table.kind != Item::Kind::table) return reading_.fault(table, "allowances", "`allowances` is a table", "[allowances] with its keys below");
        for (const Member& member : table.members) {
            const auto key = std::find_if(std::begin(kAllowances), std::end(kAllowances), [&](const AllowanceKey& one) { return one.key == member.key; });
            if (key == std::end(kAllowances)) {
                std::vector<std::string> known;
                for (const AllowanceKey& one : kAllowances) known.emplace_back(one.key);
                reading_.unknown(member, "allowances", known);
                continue;
            }
            const std::string field = "allowances." + member.key;
            const auto value = reading_.quantity(member.value, field, key->unit);
            if (!value) continue;
            if (!(*value >= key->lowest) || !(*value <= key->highest))
                reading_.fault(member.value, field,
                               ticked(field) + " is " + format_quantity(*value, key->unit) + ", outside " + format_quantity(key->lowest, key->unit) + " to " +
                                   format_quantity(key->highest, key->unit));
            else
                book_.allowances.*(key->slot) = *value;
        }
    }

    void rules(const Item& list) {
        if (list.kind != Item::Kind::array) return reading_.fault(list, "rule", "`rule` is a list of tables", "[[rule]] with its keys below, once for each rule");
        for (const Item& item : list.items) {
            if (item.kind != Item::Kind::table)
                reading_.fault(item, "rule", "`rule` is a list of tables, not of " + std::string(kind_name(item.kind)), "[[rule]] with its keys below");
            else
                one_rule(item);
        }
        if (list.items.empty()) reading_.fault(list, "rule", "the rulebook has no rule", "a table [[rule]] for each rule");
    }

    void one_rule(const Item& table) {
        Rule rule;
        reading_.misspelt.clear();
        Keys at;
        for (const Member& member : table.members) {
            if (std::find(kRuleKeys.begin(), kRuleKeys.end(), member.key) == kRuleKeys.end())
                reading_.unknown(member, "rule", kRuleKeys);
            else
                at[member.key] = &member.value;
        }
        const auto text = [&](const char* key, bool needed, const char* expected) -> std::string {
            const auto found = at.find(key);
            if (found != at.end()) return reading_.text_of(*found->second, std::string("rule.") + key).value_or("");
            if (needed && reading_.whole && !reading_.misspelt.contains(std::string("rule.") + key))
                reading_.fault(table, std::string("rule.") + key, (rule.id.empty() ? "this rule" : "the rule " + ticked(rule.id)) + " gives no " + ticked(key), expected);
            return {};
        };
        rule.id = text("id", true, "id = \"aluminium-voltage\"");
        if (!rule.id.empty()) {
            const bool plain = std::all_of(rule.id.begin(), rule.id.end(), [](char c) { return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-'; });
            if (!plain) reading_.fault(*at["id"], "rule.id", ticked(rule.id) + " is no id", "small letters, digits and -");
            const auto [earlier, fresh] = seen_.emplace(rule.id, at["id"]->place.line);
            if (!fresh) reading_.fault(*at["id"], "rule.id", "a rule " + ticked(rule.id) + " stands in line " + std::to_string(earlier->second) + " already");
        }
        // A rule of the book below, under its own id: what is given here changes it.
        Rule* below = inherited(rule.id);
        const bool changes = below && (gives_bound(at) || at.contains("rating") || at.contains("requirement"));
        if (below) {
            rule = *below;
            rule.book.clear();
            if (changes) {
                rule.clause = rule.known = rule.reading = rule.source = "";
                if (gives_bound(at)) {
                    rule.several.clear();
                    rule.curve.reset();
                }
            }
        }
        rule.place = table.place;
        if (const std::string title = text("title", false, ""); !title.empty()) rule.title = title;
        if (rule.title.empty()) {
            rule.title = rule.id;
            std::replace(rule.title.begin(), rule.title.end(), '-', ' ');
        }
        Subject subject;
        subject.at_levels = reading_.levels;
        if (at.contains("at_levels")) at_levels(*at["at_levels"], subject);
        if (at.contains("for")) selectors(rule, *at["for"], subject);
        else if (!below) text("for", true, "for = \"capacitor/aluminium\"");
        else known_selector(rule, subject);
        const bool flat = at.contains("permitted") || at.contains("covered");
        const std::string stress = text("stress", !below && !flat, "stress = \"voltage_peak_repetitive\"");
        const std::size_t before = reading_.faults.size();
        if (!stress.empty()) take_stress(rule, stress, *at["stress"], subject);
        subject.stress_known = (!stress.empty() || below) && reading_.faults.size() == before;
        rule.of_part = flat && stress.empty() && !below;
        if (!below || changes) read_bound(reading_, rule, table, at, subject);
        read_conditions(reading_, rule, at, subject);
        if (const std::string other = text("instead_of", false, ""); !other.empty()) {
            rule.instead_of = other;
            stands_in_.emplace_back(at["instead_of"], other);
        }
        if (const std::string why = text("why", !below, "the reason, in a sentence"); !why.empty()) rule.why = why;
        if (const std::string source = text("source", !below || changes, "source = \"common practice\", or a standard with its clause"); !source.empty()) rule.source = source;
        if (const std::string clause = text("clause", false, ""); !clause.empty()) rule.clause = clause;
        if (const std::string other = text("reading", false, ""); !other.empty()) rule.reading = other;
        const bool need_known = rule.known.empty() && !rule.source.empty() && rule.source != "common practice";
        if (const std::string known = text("known", need_known, "known = \"seen\", \"seen, secondary\" or \"from memory\""); !known.empty()) rule.known = known;
        if (rule.known.empty() && rule.source == "common practice") rule.known = rule.source;
        if (at.contains("known") && !rule.known.empty() && std::find(kKnown.begin(), kKnown.end(), rule.known) == kKnown.end())
            reading_.fault(*at["known"], "rule.known", ticked(rule.known) + " is no way of knowing a value", "one of " + listed(kKnown));
        const bool here = subject.at_levels.empty() || std::find(subject.at_levels.begin(), subject.at_levels.end(), reading_.level) != subject.at_levels.end();
        if (!here) return;
        if (below) *below = std::move(rule);
        else book_.rules.push_back(std::move(rule));
    }

    void at_levels(const Item& item, Subject& subject) {
        if (reading_.levels.empty()) return reading_.fault(item, "rule.at_levels", "the rulebook has no levels", "levels = [\"I\", \"II\", \"III\"] at its top");
        subject.at_levels = reading_.texts_of(item, "rule.at_levels");
        for (const std::string& one : subject.at_levels)
            if (std::find(reading_.levels.begin(), reading_.levels.end(), one) == reading_.levels.end())
                reading_.fault(item, "rule.at_levels", "there is no level " + ticked(one), "one of " + listed(reading_.levels));
    }

    static void known_selector(const Rule& rule, Subject& subject) {
        subject.family_known = true;
        if (rule.selects != "converter") subject.family = find_any_family(rule.selects.substr(0, rule.selects.find('/')));
    }

    void selectors(Rule& rule, const Item& item, Subject& subject) {
        rule.selects.clear();
        const auto one = [&](const Item& place) {
            const auto text = reading_.text_of(place, "rule.for");
            if (!text) return;
            bool known = false;
            const auto family = family_of_selector(*text, place, known);
            if (subject.family_known && known && family != subject.family) reading_.fault(place, "rule.for", "one rule is for parts of one family");
            if (known) subject.family = family;
            subject.family_known = subject.family_known || known;
            rule.selects += (rule.selects.empty() ? "" : ", ") + *text;
        };
        if (item.kind != Item::Kind::array) return one(item);
        if (item.items.empty()) reading_.fault(item, "rule.for", "`for` is empty", "for = \"capacitor/aluminium\"");
        for (const Item& each : item.items) one(each);
    }

    /// @returns the family, empty for "converter"
    std::optional<Family> family_of_selector(const std::string& selects, const Item& item, bool& known) {
        const auto slash = selects.find('/');
        const std::string name = selects.substr(0, slash);
        if (selects == "converter") {
            known = true;
            return std::nullopt;
        }
        const auto family = find_any_family(name);
        if (!family) {
            const std::vector<std::string> words = {"switch", "rectifier", "capacitor", "fuse", "choke", "resistor", "converter"};
            const std::string near = nearest_word(name, words);
            reading_.fault(item, "rule.for", "there is no family " + ticked(name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
            return std::nullopt;
        }
        known = true;
        if (slash == std::string::npos) return family;
        const std::string technology = selects.substr(slash + 1);
        const std::vector<std::string> words = technologies(*family);
        if (!words.empty() && std::find(words.begin(), words.end(), technology) == words.end()) {
            const std::string near = nearest_word(technology, words);
            reading_.fault(item, "rule.for", "a " + name + " has no technology " + ticked(technology) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                           "one of " + listed(words));
        }
        return family;
    }

    void take_stress(Rule& rule, const std::string& name, const Item& item, const Subject& subject) {
        std::vector<std::string> words;
        for (const StressRow& row : stress_rows())
            if (!subject.family_known || has_stress(row, subject.family)) words.emplace_back(row.info.name);
        const auto stress = find_stress(name);
        if (!stress) {
            const std::string near = nearest_word(name, words);
            reading_.fault(item, "rule.stress", "there is no stress " + ticked(name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
            return;
        }
        if (subject.family_known && !has_stress(stress_row(*stress), subject.family)) {
            reading_.fault(item, "rule.stress", "a " + (subject.family ? std::string(to_string(*subject.family)) : "converter") + " has no stress " + ticked(name), "one of " + listed(words));
            return;
        }
        rule.stress = *stress;
    }

    void finish() {
        for (const auto& [item, other] : stands_in_) {
            const bool skipped = seen_.contains(other);  // it stands at another level
            const std::vector<std::string> known = ids();
            if (skipped || std::find(known.begin(), known.end(), other) != known.end()) continue;
            const std::string near = nearest_word(other, known);
            reading_.fault(*item, "rule.instead_of", "there is no rule " + ticked(other) + " to stand in for" + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"));
        }
        book_.name = book_.stem + (book_.level.empty() ? "" : ":" + book_.level);
    }

    Reading reading_;
    const FindBook& find_;
    Rulebook book_;
    std::map<std::string, int> seen_;
    std::vector<std::pair<const Item*, std::string>> stands_in_;
};

}  // namespace

Rulebook read_rulebook(std::string_view text, const std::string& file, const std::string& level, const FindBook& find) {
    std::vector<Fault> faults;
    const ItemText items = read_items(text, file, faults);
    Rulebook book = Reader(file, level, find, items.whole, faults).run(items.root);
    if (!faults.empty()) {
        std::stable_sort(faults.begin(), faults.end(), [](const Fault& a, const Fault& b) {
            return std::tuple(a.place.line, a.place.column) < std::tuple(b.place.line, b.place.column);
        });
        throw InputError(std::move(faults));
    }
    return book;
}

}  // namespace binwright
