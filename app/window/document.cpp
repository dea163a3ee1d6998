// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/document.hpp"

#include <QFile>
#include <QFileInfo>
#include <QSaveFile>
#include <stdexcept>

namespace binwright {

std::string Document::name() const {
    if (!path.empty()) return QFileInfo(QString::fromStdString(path)).fileName().toStdString();
    return converter.title.empty() ? "new converter" : converter.title;
}

Document open_document(const std::string& path) {
    QFile file(QString::fromStdString(path));
    if (!file.open(QIODevice::ReadOnly)) throw InputError(Fault{{path, 0, 0}, "", "the file cannot be read: " + file.errorString().toStdString(), ""});
    Document document;
    document.text = file.readAll().toStdString();
    document.converter = read_converter(document.text, path);
    document.path = path;
    document.kept = document.saved = document.text;
    document.kept_converter = document.converter;
    return document;
}

Document new_document(std::string text) {
    Document document;
    document.converter = read_converter(text, "new converter");
    document.text = document.kept = std::move(text);
    document.kept_converter = document.converter;
    return document;
}

void change(Document& document, std::string_view key, std::string_view value) {
    std::string text = change_converter_text(document.text, document.name(), key, value);
    Converter converter = read_converter(text, document.path.empty() ? "new converter" : document.path);
    document.text = std::move(text);
    document.converter = std::move(converter);
}

void keep(Document& document) {
    document.kept = document.text;
    document.kept_converter = document.converter;
}

void drop(Document& document) {
    document.text = document.kept;
    document.converter = document.kept_converter;
}

void save(Document& document, const std::string& path) {
    QSaveFile file(QString::fromStdString(path));
    if (!file.open(QIODevice::WriteOnly) || file.write(document.text.data(), static_cast<qint64>(document.text.size())) < 0 || !file.commit())
        throw std::runtime_error(path + " cannot be written: " + file.errorString().toStdString());
    keep(document);
    document.saved = document.text;
    document.path = path;
}

}  // namespace binwright
