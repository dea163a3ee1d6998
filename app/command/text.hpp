// SPDX-License-Identifier: GPL-3.0-or-later
// Plain text for terminals: columns that line up in UTF-8, paragraphs folded at 96 columns, verdicts in colour.
#pragma once
#include <string>
#include <string_view>
#include <vector>

#include "engine/answer/judge.hpp"

namespace binwright {

inline constexpr int kTextWidth = 96;

/// Characters of a UTF-8 text (combining marks are not told apart).
[[nodiscard]] int text_width(std::string_view text);
/// With spaces behind (or before, when `right`) up to `width` characters.
[[nodiscard]] std::string padded(std::string_view text, int width, bool right = false);
/// Folded at spaces; every line after the first begins with `hang` spaces. The first is taken to begin at column `start`.
[[nodiscard]] std::string folded(std::string_view text, int start = 0, int hang = 0, int width = kTextWidth);

/// Lines whose columns are two spaces apart, each folded in its last column where it is too wide, `hang` deep.
[[nodiscard]] std::string folded_lines(std::string_view text, int hang);

/// Rows in columns two spaces apart; the last column is folded under itself. Columns named in `right` are right-aligned.
struct Rows {
    std::vector<std::vector<std::string>> rows;
    std::vector<int> right;
    [[nodiscard]] std::string text(int indent = 0) const;
};

/// The word in the verdict's colour: never colour alone.
[[nodiscard]] std::string painted(Verdict verdict, std::string_view text, bool colour);
/// Colours the first occurrence of the verdict's word in a line.
[[nodiscard]] std::string with_verdict_painted(std::string line, Verdict verdict, bool colour);

/// "a heading" in bold where colours are wanted.
[[nodiscard]] std::string heading(std::string_view text, bool colour);

/// "1 lot", "3 lots".
[[nodiscard]] std::string counted(std::size_t count, std::string_view one, std::string_view many = {});

/// "output_capacitor" → "output capacitor".
[[nodiscard]] std::string spaced(std::string_view name);

}  // namespace binwright
