// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/command/text.hpp"

#include <algorithm>

namespace binwright {

int text_width(std::string_view text) {
    return static_cast<int>(std::ranges::count_if(text, [](char c) { return (static_cast<unsigned char>(c) & 0xC0) != 0x80; }));
}

std::string padded(std::string_view text, int width, bool right) {
    const std::string space(static_cast<std::size_t>(std::max(0, width - text_width(text))), ' ');
    return right ? space + std::string(text) : std::string(text) + space;
}

std::string folded(std::string_view text, int start, int hang, int width) {
    std::string out;
    int column = start;
    bool first = true;
    while (!text.empty()) {
        const std::size_t space = text.find(' ');
        const std::string_view word = text.substr(0, space);
        text.remove_prefix(space == std::string_view::npos ? text.size() : space + 1);
        if (word.empty()) continue;
        const int length = text_width(word);
        if (!first && column + 1 + length > width) {
            out += '\n' + std::string(static_cast<std::size_t>(hang), ' ');
            column = hang;
        } else if (!first) {
            out += ' ';
            ++column;
        }
        out += word;
        column += length;
        first = false;
    }
    return out;
}

std::string folded_lines(std::string_view text, int hang) {
    std::string out;
    while (!text.empty()) {
        const std::size_t end = text.find('\n');
        const std::string_view line = text.substr(0, end);
        text.remove_prefix(end == std::string_view::npos ? text.size() : end + 1);
        const std::size_t gap = text_width(line) > kTextWidth ? line.rfind("  ") : std::string_view::npos;
        if (gap == std::string_view::npos) {
            out += line;
        } else {
            const std::string_view front = line.substr(0, gap + 2);
            out += std::string(front) + folded(line.substr(gap + 2), text_width(front), hang);
        }
        out += '\n';
    }
    return out;
}

std::string Rows::text(int indent) const {
    std::vector<int> widths;
    for (const auto& row : rows)
        for (std::size_t k = 0; k + 1 < row.size(); ++k) {
            if (widths.size() <= k) widths.push_back(0);
            widths[k] = std::max(widths[k], text_width(row[k]));
        }
    std::string out;
    for (const auto& row : rows) {
        std::string line(static_cast<std::size_t>(indent), ' ');
        int column = indent;
        for (std::size_t k = 0; k < row.size(); ++k) {
            if (k + 1 == row.size()) {
                const int room = std::max(kTextWidth, column + 30);
                line += folded(row[k], column, column, room);
            } else {
                line += padded(row[k], widths[k], std::ranges::count(right, static_cast<int>(k)) > 0) + "  ";
                column += widths[k] + 2;
            }
        }
        while (line.ends_with(' ')) line.pop_back();
        out += line + '\n';
    }
    return out;
}

std::string painted(Verdict verdict, std::string_view text, bool colour) {
    if (!colour) return std::string(text);
    const char* code = verdict == Verdict::rejected ? "\x1b[1;31m" : verdict == Verdict::unproven ? "\x1b[33m"
                       : verdict == Verdict::holds  ? "\x1b[36m" : "\x1b[2m";
    return code + std::string(text) + "\x1b[0m";
}

std::string with_verdict_painted(std::string line, Verdict verdict, bool colour) {
    const std::string word(to_string(verdict));
    const std::size_t found = colour ? line.find(word) : std::string::npos;
    if (found != std::string::npos) line.replace(found, word.size(), painted(verdict, word, true));
    return line;
}

std::string heading(std::string_view text, bool colour) {
    return colour ? "\x1b[1m" + std::string(text) + "\x1b[0m" : std::string(text);
}

std::string counted(std::size_t count, std::string_view one, std::string_view many) {
    if (count == 1) return "1 " + std::string(one);
    return std::to_string(count) + " " + (many.empty() ? std::string(one) + "s" : std::string(many));
}

std::string spaced(std::string_view name) {
    std::string out(name);
    std::ranges::replace(out, '_', ' ');
    return out;
}

}  // namespace binwright
