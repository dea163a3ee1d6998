// SPDX-License-Identifier: GPL-3.0-or-later
// The rulebooks that came with the program, and which rules of one apply to a part.
#include <algorithm>

#include "engine/embedded.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {

std::span<const EmbeddedFile> shipped_rulebooks();

const std::vector<Rulebook>& rulebooks() {
    static const std::vector<Rulebook> books = [] {
        std::vector<Rulebook> out;
        for (const EmbeddedFile& file : shipped_rulebooks()) out.push_back(read_rulebook(file.text, std::string(file.name)));
        std::stable_sort(out.begin(), out.end(), [](const Rulebook& a, const Rulebook& b) {
            return std::pair(a.name != "house", a.name) < std::pair(b.name != "house", b.name);
        });
        return out;
    }();
    return books;
}

const Rulebook* find_rulebook(std::string_view name) {
    for (const Rulebook& book : rulebooks())
        if (book.name == name) return &book;
    return nullptr;
}

std::vector<const Rule*> rules_for(const Rulebook& book, const Part& part) {
    const std::string own = selector(part);
    std::vector<const Rule*> out;
    for (const Rule& rule : book.rules) {
        if (!selects(rule.selects, own)) continue;
        const bool overruled = std::any_of(book.rules.begin(), book.rules.end(), [&](const Rule& other) {
            return other.stress == rule.stress && other.selects.size() > rule.selects.size() && selects(other.selects, own) &&
                   id_stem(other) == id_stem(rule);
        });
        if (!overruled) out.push_back(&rule);
    }
    return out;
}

}  // namespace binwright
