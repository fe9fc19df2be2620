#include "runner/config/source_text.hpp"

#include <algorithm>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::string_view byte_order_mark = "\xEF\xBB\xBF";
constexpr std::string_view indent = "    ";
constexpr std::string_view cut_mark = "...";
constexpr std::size_t quoted_columns = 60;

std::string spaces_for_tabs(std::string_view text) {
    std::string out(text);
    std::replace(out.begin(), out.end(), '\t', ' ');
    return out;
}

/// Bytes of the first `count` code points; a byte that belongs to none counts as one.
std::size_t bytes_of_code_points(std::string_view text, std::size_t count) {
    std::size_t bytes = 0;
    while (count-- > 0 && bytes < text.size())
        bytes += std::max<std::size_t>(1, utf8_sequence_bytes(text.substr(bytes)));
    return bytes;
}

struct ShownLine {
    std::string text;
    std::size_t caret = 0;  ///< columns in front of it
};

/// The line as a terminal may show it, cut to width so that the caret's column stays inside.
ShownLine shown(std::string_view line, int column) {
    const std::size_t before_bytes = bytes_of_code_points(line, static_cast<std::size_t>(std::max(column, 1) - 1));
    const std::string before = printable(spaces_for_tabs(line.substr(0, before_bytes)));
    const std::string after = printable(spaces_for_tabs(line.substr(before_bytes)));
    const std::string whole = before + after;
    const std::size_t columns = columns_of(whole), caret = columns_of(before);
    if (columns <= shown_line_columns) return {whole, caret};
    // A third of the width in front of the caret says where one is; the rest shows what is wrong.
    std::size_t first = caret > shown_line_columns * 2 / 3 ? caret - shown_line_columns / 3 : 0;
    if (first + shown_line_columns > columns) first = columns - std::min(columns, shown_line_columns);
    const std::string_view from_first = std::string_view(whole).substr(first_columns(whole, first).size());
    std::string text(first_columns(from_first, shown_line_columns));
    if (first > 0) text.replace(0, first_columns(text, cut_mark.size()).size(), cut_mark);
    if (first + shown_line_columns < columns) {
        text.erase(first_columns(text, shown_line_columns - cut_mark.size()).size());
        text += cut_mark;
    }
    return {text, caret - first};
}

}  // namespace

SourceText::SourceText(std::string name, std::string bytes) : name_(std::move(name)), bytes_(std::move(bytes)) {
    if (bytes_.starts_with(byte_order_mark)) bytes_.erase(0, byte_order_mark.size());
    line_starts_.push_back(0);
    for (std::size_t i = 0; i < bytes_.size(); ++i) {
        if (bytes_[i] == '\n') line_starts_.push_back(i + 1);
    }
}

std::string_view SourceText::line(int number) const {
    if (number < 1 || static_cast<std::size_t>(number) > line_starts_.size()) return {};
    const std::size_t begin = line_starts_[static_cast<std::size_t>(number) - 1];
    std::size_t end = bytes_.find('\n', begin);
    if (end == std::string::npos) end = bytes_.size();
    if (end > begin && bytes_[end - 1] == '\r') --end;
    return std::string_view(bytes_).substr(begin, end - begin);
}

int SourceText::line_count() const {
    const bool ends_in_break = line_starts_.size() > 1 && line_starts_.back() == bytes_.size();
    return static_cast<int>(line_starts_.size()) - (ends_in_break ? 1 : 0);
}

Place SourceText::place_of_byte(std::size_t offset) const {
    const auto next = std::upper_bound(line_starts_.begin(), line_starts_.end(), std::min(offset, bytes_.size()));
    const auto line = static_cast<int>(next - line_starts_.begin());
    const std::size_t begin = line_starts_[static_cast<std::size_t>(line) - 1];
    const std::string_view before = std::string_view(bytes_).substr(begin, offset - begin);
    int column = 1;
    for (std::size_t at = 0; at < before.size(); ++column)
        at += std::max<std::size_t>(1, utf8_sequence_bytes(before.substr(at)));
    return {line, column};
}

std::string SourceText::render(Place place, std::string_view problem, std::string_view remedy) const {
    const ShownLine where = shown(line(place.line), place.column);
    std::string text = printable(name_) + ":" + std::to_string(place.line) + ":" + std::to_string(place.column) + ": ";
    text += problem;
    text += "\n" + std::string(indent) + where.text + "\n" + std::string(indent) + std::string(where.caret, ' ') + "^";
    if (!remedy.empty()) text += "\n  " + std::string(remedy);
    return text;
}

std::optional<std::string> SourceText::not_text() const {
    for (std::size_t at = 0; at < bytes_.size();) {
        if (bytes_[at] == '\0') {
            return render(place_of_byte(at), "a NUL byte; this is not a text file", "save it as UTF-8 text");
        }
        const std::size_t bytes = utf8_sequence_bytes(std::string_view(bytes_).substr(at));
        if (bytes == 0) {
            return render(place_of_byte(at),
                          "the byte " + printable(std::string_view(bytes_).substr(at, 1)) + " is not UTF-8",
                          "save it as UTF-8 text");
        }
        at += bytes;
    }
    return std::nullopt;
}

std::string render_without_line(std::string_view file, std::string_view problem, std::string_view remedy) {
    std::string text = printable(file) + ": " + std::string(problem);
    if (!remedy.empty()) text += "\n  " + std::string(remedy);
    return text;
}

std::string quoted(std::string_view text) {
    const std::string safe = printable(text);
    if (columns_of(safe) <= quoted_columns) return "\"" + safe + "\"";
    return "\"" + std::string(first_columns(safe, quoted_columns - cut_mark.size())) + std::string(cut_mark) + "\"";
}

}  // namespace halflsb
