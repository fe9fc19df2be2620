#include "runner/report/text_style.hpp"

#include <algorithm>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t column_gap = 2;

std::string_view start_of(Ink ink) {
    switch (ink) {
        case Ink::good:
            return "\x1b[32m";
        case Ink::bad:
            return "\x1b[1;31m";
        case Ink::doubtful:
            return "\x1b[33m";
        case Ink::faint:
            return "\x1b[2m";
        case Ink::plain:
            break;
    }
    return "";
}

/// Columns that `table` takes with the columns in `kept`, and the width of each.
std::size_t width_of(const Table& table, const std::vector<std::size_t>& kept, std::vector<std::size_t>& widths) {
    std::size_t total = table.indent;
    widths.clear();
    for (const std::size_t c : kept) {
        std::size_t widest = columns_of(table.columns[c].heading);
        for (const auto& row : table.rows) widest = std::max(widest, columns_of(row[c]));
        widths.push_back(widest);
        total += widest + (widths.size() > 1 ? column_gap : 0);
    }
    return total;
}

}  // namespace

std::string painted(const TextStyle& style, Ink ink, std::string_view text) {
    if (!style.colour || ink == Ink::plain) return std::string(text);
    return std::string(start_of(ink)) + std::string(text) + "\x1b[0m";
}

std::string wrapped(const TextStyle& style, std::string_view text, std::size_t indent) {
    const std::size_t width = static_cast<std::size_t>(std::max(style.width, 1));
    std::string out;
    while (true) {
        const std::size_t line_end = std::min(text.find('\n'), text.size());
        std::string_view rest = text.substr(0, line_end);
        // Blanks that lead a line (the caret below a quoted line of a plan) are part of its layout.
        const std::size_t own_indent = std::min(rest.find_first_not_of(' '), rest.size());
        rest.remove_prefix(own_indent);
        const std::size_t full_indent = indent + own_indent;
        do {
            const std::size_t room = width > full_indent ? width - full_indent : 1;
            std::size_t take = rest.size();
            if (columns_of(rest) > room) {
                const std::string_view fits = first_columns(rest, room);
                take = rest[fits.size()] == ' ' ? fits.size() : fits.rfind(' ');
                if (take == std::string_view::npos) take = std::min(rest.find(' '), rest.size());
            }
            if (take > 0) out += std::string(full_indent, ' ');
            out += rest.substr(0, take);
            out += '\n';
            rest.remove_prefix(take);
            rest.remove_prefix(std::min(rest.find_first_not_of(' '), rest.size()));
        } while (!rest.empty());
        if (line_end == text.size()) return out;
        text.remove_prefix(line_end + 1);
    }
}

std::string cut_to(const TextStyle& style, std::string_view text, std::size_t columns) {
    if (columns_of(text) <= columns) return std::string(text);
    const std::string_view ellipsis = style.unicode ? "…" : "...";
    const std::size_t taken = columns_of(ellipsis);
    if (columns < taken) return std::string(first_columns(text, columns));
    // From the middle: cases of one [case.each] differ at the end of their names.
    const std::size_t behind = (columns - taken) / 2;
    std::string_view end = text;
    while (columns_of(end) > behind)
        end.remove_prefix(first_columns(end, 1).empty() ? 1 : first_columns(end, 1).size());
    return std::string(first_columns(text, columns - taken - behind)) + std::string(ellipsis) + std::string(end);
}

std::string padded(std::string_view text, std::size_t columns) {
    const std::size_t taken = columns_of(text);
    return std::string(text) + std::string(columns > taken ? columns - taken : 0, ' ');
}

std::string labelled(const TextStyle& style, std::string_view key, const std::string& value, std::size_t column) {
    std::string lines = wrapped(style, value, column);
    lines.replace(0, std::min(column, lines.size()), padded(key, column));
    return lines;
}

std::string padded_left(std::string_view text, std::size_t columns) {
    const std::size_t taken = columns_of(text);
    return std::string(columns > taken ? columns - taken : 0, ' ') + std::string(text);
}

std::string laid_out(const TextStyle& style, const Table& table, std::size_t* width) {
    std::vector<std::size_t> kept(table.columns.size());
    for (std::size_t c = 0; c < kept.size(); ++c) kept[c] = c;
    std::vector<std::size_t> widths;
    std::size_t total = width_of(table, kept, widths);
    while (total > static_cast<std::size_t>(style.width)) {
        auto next = kept.end();
        for (auto it = kept.begin(); it != kept.end(); ++it) {
            const int order = table.columns[*it].drop_order;
            if (order > 0 && (next == kept.end() || order < table.columns[*next].drop_order)) next = it;
        }
        if (next == kept.end()) break;
        kept.erase(next);
        total = width_of(table, kept, widths);
    }
    if (width != nullptr) *width = total;

    std::string out;
    const auto add_line = [&](const auto& cell_of) {
        std::string line(table.indent, ' ');
        for (std::size_t i = 0; i < kept.size(); ++i) {
            if (i > 0) line += std::string(column_gap, ' ');
            const std::string& cell = cell_of(kept[i]);
            line += table.columns[kept[i]].to_the_right ? padded_left(cell, widths[i]) : padded(cell, widths[i]);
        }
        line.erase(line.find_last_not_of(' ') + 1);
        out += line + "\n";
    };
    add_line([&](std::size_t c) -> const std::string& { return table.columns[c].heading; });
    for (const auto& row : table.rows) {
        add_line([&](std::size_t c) -> const std::string& { return row[c]; });
    }
    return out;
}

}  // namespace halflsb
