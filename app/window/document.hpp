// SPDX-License-Identifier: GPL-3.0-or-later
// The converter that is open: its text, what of it is on trial, and where it is saved.
#pragma once
#include <string>

#include "engine/converter/converter.hpp"

namespace binwright {

struct Document {
    std::string path;   ///< empty: never saved
    std::string text;   ///< as it stands now, trial changes included
    std::string kept;   ///< before the changes on trial
    std::string saved;  ///< as on disk
    Converter converter;       ///< of text
    Converter kept_converter;  ///< of kept

    [[nodiscard]] bool unsaved() const { return text != saved; }
    [[nodiscard]] bool on_trial() const { return text != kept; }
    [[nodiscard]] std::string name() const;  ///< file name, or the title
};

/// @throws InputError with every fault; then nothing is opened
[[nodiscard]] Document open_document(const std::string& path);
[[nodiscard]] Document new_document(std::string text);

/// Puts one value on trial. @throws InputError; then the document is as before
void change(Document& document, std::string_view key, std::string_view value);
void keep(Document& document);
void drop(Document& document);
/// Writes the file whole or not at all. @throws std::runtime_error
void save(Document& document, const std::string& path);

}  // namespace binwright
