#include "oracle/filters/text_table.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

namespace halflsb {

namespace {

constexpr std::string_view how =
    "write one number a line, or the same count on every line between commas; with a decimal point; # starts a comment";
constexpr std::string_view point = "write numbers with a decimal point, 0.5";
constexpr std::string_view blanks = " \t\r";

struct Cell {
    std::string_view text;
    std::size_t at = 0;
};

std::string_view trimmed(std::string_view text, std::size_t& at) {
    const std::size_t first = std::min(text.find_first_not_of(blanks), text.size());
    at += first;
    text.remove_prefix(first);
    return text.substr(0, text.find_last_not_of(blanks) + 1);
}

std::optional<double> number_of(std::string_view text) {
    const std::string_view digits = text.starts_with('+') && !text.starts_with("+-") ? text.substr(1) : text;
    double value = 0.0;
    const auto [end, failure] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
    if (digits.empty() || failure != std::errc() || end != digits.data() + digits.size()) return std::nullopt;
    return value;
}

/// A name starts with a letter, in whatever script.
bool is_name(std::string_view text) {
    if (text.empty() || number_of(text)) return false;
    const auto first = static_cast<unsigned char>(text.front());
    return (first >= 'a' && first <= 'z') || (first >= 'A' && first <= 'Z') || first == '_' || first == '"' ||
           first >= 0x80U;
}

std::string unquoted(std::string_view text) {
    if (text.size() >= 2 && text.front() == '"' && text.back() == '"') text = text.substr(1, text.size() - 2);
    return std::string(text);
}

bool is_whole_text(std::string_view text) { return text.find_first_of(".eEnN") == std::string_view::npos; }

/// "0025", "-0": no program writes a whole number so, it is what a decimal comma leaves.
bool is_half_of_a_number(std::string_view text) {
    const std::string_view digits = text.substr(text.starts_with('-') || text.starts_with('+') ? 1 : 0);
    return is_whole_text(text) &&
           (text == "-0" || (digits.size() > 1 && digits[0] == '0' && digits[1] >= '0' && digits[1] <= '9'));
}

class TextReader {
public:
    TextReader(std::string_view text, std::string_view column) : text_(text), column_(column) {}

    ReadTable read() {
        for (std::size_t begin = 0; begin <= text_.size() && !problem_;) {
            const std::size_t end = std::min(text_.find('\n', begin), text_.size());
            read_line(begin, end);
            begin = end + 1;
        }
        if (!problem_ && table_.numbers.empty()) refuse(0, "there is no number in the file", how);
        if (!problem_) look_for_decimal_commas();
        if (!problem_ && !column_.empty()) take_column();
        if (problem_) return *std::move(problem_);
        // One number a line is one long list.
        table_.row_numbers = columns_ <= 1 || is_continued_ ? 0 : columns_;
        return std::move(table_);
    }

private:
    void refuse(std::size_t at, std::string problem, std::string_view remedy) {
        if (!problem_) problem_ = FileProblem{at, {}, std::move(problem), std::string(remedy)};
    }

    void read_line(std::size_t begin, std::size_t end) {
        std::size_t at = begin;
        const std::string_view whole = text_.substr(begin, end - begin);
        const std::string_view line = trimmed(whole.substr(0, whole.find('#')), at);
        if (line.empty()) return;
        ++lines_;
        if (separator_ == '\0') {
            separator_ = line.find(';') != std::string_view::npos    ? ';'
                         : line.find('\t') != std::string_view::npos ? '\t'
                         : line.find(',') != std::string_view::npos  ? ','
                                                                     : ' ';
        }
        split(line, at);
        const bool ends_open = was_open_;
        was_open_ = cells_.size() > 1 && cells_.back().text.empty() && separator_ != ' ';
        if (was_open_) cells_.pop_back();
        if (table_.numbers.empty() && table_.column_names.empty() &&
            std::all_of(cells_.begin(), cells_.end(), [](const Cell& cell) { return is_name(cell.text); })) {
            read_names();
            return;
        }
        read_numbers(at, ends_open);
    }

    void split(std::string_view line, std::size_t at) {
        cells_.clear();
        for (std::size_t begin = 0;;) {
            std::size_t end = std::min(line.find(separator_, begin), line.size());
            std::size_t cell_at = at + begin;
            const std::string_view text = trimmed(line.substr(begin, end - begin), cell_at);
            if (separator_ != ' ' || !text.empty()) cells_.push_back({text, cell_at});
            if (end == line.size()) return;
            begin = end + 1;
        }
    }

    void read_names() {
        for (const Cell& cell : cells_) {
            std::string name = unquoted(cell.text);
            const auto& names = table_.column_names;
            if (std::find(names.begin(), names.end(), name) != names.end())
                return refuse(cell.at, "two columns are called " + quoted_from_file(name),
                              "give each a name of its own");
            table_.column_names.push_back(std::move(name));
        }
        columns_ = cells_.size();
        // Of one name the separator is not known yet.
        if (columns_ == 1) separator_ = '\0';
    }

    void read_numbers(std::size_t at, bool continues) {
        if (columns_ == 0) columns_ = cells_.size();
        const bool has_rows = !table_.numbers.empty();
        is_continued_ = has_rows ? is_continued_ && continues : true;
        if (cells_.size() != columns_ && !(is_continued_ && has_rows)) return refuse_columns(at);
        if (cells_.size() != columns_ && !table_.column_names.empty()) return refuse_columns(at);
        is_ragged_ = is_ragged_ || cells_.size() != columns_;
        if (is_ragged_ && !is_continued_) return refuse_columns(at);
        for (const Cell& cell : cells_) {
            const auto value = number_of(cell.text);
            if (!value || !std::isfinite(*value)) return refuse_cell(cell, value.has_value());
            if (table_.numbers.size() >= most_file_numbers)
                return refuse(cell.at, "there are more than " + std::to_string(most_file_numbers) + " numbers", how);
            table_.numbers.push_back(*value);
            table_.places.push_back(cell.at);
            if (first_half_ == 0 && cells_.size() > 1 && separator_ == ',' && is_half_of_a_number(cell.text))
                first_half_ = cell.at + 1;
            all_whole_ = all_whole_ && is_whole_text(cell.text);
        }
    }

    void refuse_columns(std::size_t at) {
        const std::size_t count = cells_.size();
        const bool is_doubled = separator_ == ',' && count != columns_ && (count == 2 * columns_ || columns_ == 1);
        refuse(at,
               std::to_string(count) + (count == 1 ? " number" : " numbers") + " in this line, " +
                   std::to_string(columns_) + " in those above" + (is_doubled ? ": have they a decimal comma?" : ""),
               is_doubled ? point : how);
    }

    void refuse_cell(const Cell& cell, bool is_number) {
        const std::string shown = quoted_from_file(cell.text);
        if (cell.text.empty()) return refuse(cell.at, "a number is missing", how);
        if (is_number) return refuse(cell.at, shown + " is no finite number", how);
        if (cell.text.find(',') != std::string_view::npos)
            return refuse(cell.at, shown + " is not one number: has it a decimal comma?", point);
        refuse(cell.at, shown + " is not one number", how);
    }

    /// "0,25" between commas looks like the numbers 0 and 25: the halves of many give themselves away.
    void look_for_decimal_commas() {
        if (first_half_ > 0 && all_whole_)
            refuse(first_half_ - 1, "these look like numbers with a decimal comma", point);
    }

    void take_column() {
        const auto& names = table_.column_names;
        const auto found = std::find(names.begin(), names.end(), column_);
        if (found == names.end()) {
            std::string known;
            for (const std::string& name : names) {
                if (known.size() > 100) continue;
                known += (known.empty() ? "its columns are " : ", ") + quoted_from_file(name);
            }
            problem_ = FileProblem{std::nullopt, "file_array",
                                   "file_array = " + quoted_from_file(column_) + ": the file has no such column",
                                   known.empty() ? "a first line with words would name its columns" : known};
            return;
        }
        CoefficientTable one;
        for (auto i = static_cast<std::size_t>(found - names.begin()); i < table_.numbers.size(); i += columns_) {
            one.numbers.push_back(table_.numbers[i]);
            one.places.push_back(table_.places[i]);
        }
        table_ = std::move(one);
        columns_ = 1;
    }

    std::string_view text_, column_;
    std::optional<FileProblem> problem_;
    CoefficientTable table_;
    char separator_ = '\0';
    std::vector<Cell> cells_;
    std::size_t columns_ = 0, lines_ = 0;
    std::size_t first_half_ = 0;  ///< a byte and 1; 0: none
    bool was_open_ = false, is_continued_ = false, is_ragged_ = false, all_whole_ = true;
};

}  // namespace

ReadTable read_text_table(std::string_view text, std::string_view column) { return TextReader(text, column).read(); }

}  // namespace halflsb
