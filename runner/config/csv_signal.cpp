#include "runner/config/csv_signal.hpp"

#include <algorithm>
#include <cmath>

#include "runner/config/column_times.hpp"
#include "runner/config/csv_cells.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view time_word = "time_s", rate_word = "rate_hz";
constexpr std::string_view how =
    "write the same count of numbers on every line, with a decimal point, between commas, semicolons or tabs";
constexpr std::string_view point = "write numbers with a decimal point, 0.5";

/// A name starts with a letter, in whatever script.
bool is_name(std::string_view text) {
    if (text.empty() || csv_number(text)) return false;
    const auto first = static_cast<unsigned char>(text.front());
    return (first >= 'a' && first <= 'z') || (first >= 'A' && first <= 'Z') || first == '_' || first == '"' ||
           first >= 0x80U;
}

std::string unquoted(std::string_view text) {
    if (text.size() >= 2 && text.front() == '"' && text.back() == '"') text = text.substr(1, text.size() - 2);
    return std::string(text);
}

class CsvReader {
public:
    CsvReader(const SignalFileName& name, const SourceText& source) : name_(name), source_(source) {}

    std::variant<SignalFile, std::string> read() {
        if (auto text = source_.not_text()) return *text;
        for (int number = 1; number <= source_.line_count() && problem_.empty(); ++number) read_line(number);
        if (problem_.empty() && (columns_.empty() || columns_.front().empty()))
            refuse({1, 1}, "there is no sample in the file", how);
        if (problem_.empty()) take_times();
        if (problem_.empty() && columns_.empty())
            refuse({1, 1}, "the file holds times and no samples", "add a column with the samples");
        if (!problem_.empty()) return problem_;
        return SignalFile{name_.as_written, std::move(names_), std::move(columns_),
                          whole_numbers_,   rate_hz_,          time_column_ ? *time_column_ + 1 : 0};
    }

private:
    void refuse(Place place, std::string_view problem, std::string_view remedy) {
        if (problem_.empty()) problem_ = source_.render(place, problem, remedy);
    }
    void read_line(int number) {
        const std::string_view whole = source_.line(number);
        const std::size_t hash = whole.find('#');
        if (hash != std::string_view::npos) read_comment(number, whole, hash + 1);
        const std::string_view line = whole.substr(0, hash);
        if (line.find_first_not_of(" \t") == std::string_view::npos) return;
        if (separator_ == '\0') {
            separator_ = line.find(';') != std::string_view::npos    ? ';'
                         : line.find('\t') != std::string_view::npos ? '\t'
                                                                     : ',';
            split_cells(line, separator_, cells_);
            start_columns(number, line);
            if (std::all_of(cells_.begin(), cells_.end(), [](const CsvCell& cell) { return is_name(cell.text); })) {
                read_names(number, line);
                return;
            }
        } else {
            split_cells(line, separator_, cells_);
        }
        read_numbers(number, line);
    }

    /// "rate_hz = 1200"
    void read_comment(int number, std::string_view line, std::size_t from) {
        const std::size_t begin = line.find_first_not_of(" \t#", from);
        if (begin == std::string_view::npos || line.substr(begin, rate_word.size()) != rate_word) return;
        std::size_t at = line.find_first_not_of(" \t", begin + rate_word.size());
        if (at == std::string_view::npos || (line[at] != '=' && line[at] != ':')) return;
        at = std::min(line.find_first_not_of(" \t", at + 1), line.size());
        std::string_view text = line.substr(at);
        text = text.substr(0, text.find_last_not_of(" \t") + 1);
        const auto rate_hz = csv_number(text);
        const Place place = csv_place(number, line, at);
        if (!rate_hz || !std::isfinite(*rate_hz) || !(*rate_hz > 0.0)) {
            refuse(place, quoted(text) + " is no sample rate", "write # rate_hz = 1200, or no such comment");
        } else if (rate_hz_ && *rate_hz_ != *rate_hz) {
            refuse(place, "a second rate_hz, beside " + number_text(*rate_hz_) + " Hz", "keep the one that is right");
        } else {
            rate_hz_ = rate_hz;
        }
    }

    void start_columns(int number, std::string_view line) {
        if (cells_.size() > most_signal_columns) {
            refuse(csv_place(number, line, cells_[most_signal_columns].offset),
                   std::to_string(cells_.size()) + " columns, the most are " + std::to_string(most_signal_columns),
                   "leave out those that no case uses");
        }
        names_.assign(cells_.size(), std::string());
        columns_.assign(cells_.size(), std::vector<double>());
    }

    void read_names(int number, std::string_view line) {
        for (std::size_t c = 0; c < cells_.size(); ++c) {
            std::string column = unquoted(cells_[c].text);
            if (std::find(names_.begin(), names_.end(), column) != names_.end()) {
                refuse(csv_place(number, line, cells_[c].offset), "two columns are called " + quoted(column),
                       "give each column a name of its own");
                return;
            }
            if (column == time_word) time_column_ = c;
            names_[c] = std::move(column);
        }
    }

    void read_numbers(int number, std::string_view line) {
        if (cells_.size() != columns_.size()) {
            const std::size_t last = std::min(cells_.size(), columns_.size() + 1) - 1;
            const bool is_doubled = separator_ == ',' && cells_.size() == 2 * columns_.size();
            refuse(csv_place(number, line, cells_[last].offset),
                   std::to_string(cells_.size()) + (cells_.size() == 1 ? " column" : " columns") + " in this line, " +
                       std::to_string(columns_.size()) + " in those above" +
                       (is_doubled ? ": have the numbers a decimal comma?" : ""),
                   is_doubled ? point : how);
            return;
        }
        for (std::size_t c = 0; c < cells_.size(); ++c) {
            const std::string_view text = cells_[c].text;
            const auto value = csv_number(text);
            if (!value || !std::isfinite(*value)) {
                refuse_cell(csv_place(number, line, cells_[c].offset), text, value.has_value());
                return;
            }
            if (c == time_column_) {
                time_resolution_s_ = std::min(time_resolution_s_, resolution_of(text));
                time_lines_.push_back(number);
            } else if (whole_numbers_ && text.find_first_of(".eE") != std::string_view::npos) {
                whole_numbers_ = false;
            }
            columns_[c].push_back(*value);
        }
    }

    void refuse_cell(Place place, std::string_view text, bool is_number) {
        if (text.empty()) {
            refuse(place, "a number is missing", how);
        } else if (is_number) {
            refuse(place, quoted(text) + " is no finite number", "a sample is a finite number; mend or cut the record");
        } else if (text.find(',') != std::string_view::npos) {
            refuse(place, quoted(text) + " is not one number: has it a decimal comma?", point);
        } else {
            refuse(place, quoted(text) + " is not one number", how);
        }
    }

    void take_times() {
        if (!time_column_) return;
        const auto at = static_cast<std::ptrdiff_t>(*time_column_);
        const std::vector<double> times_s = std::move(columns_[*time_column_]);
        columns_.erase(columns_.begin() + at);
        names_.erase(names_.begin() + at);
        const ColumnTimes times{times_s, time_resolution_s_, name_.rate_hz};
        const auto found = rate_of(times);
        if (!found.problem.empty()) {
            refuse({time_lines_[found.index], 1}, found.problem, found.remedy);
            return;
        }
        if (!found.rate_hz) return;
        if (rate_hz_ && !fits(times, *rate_hz_)) {
            refuse({time_lines_.front(), 1},
                   "time_s says " + number_text(*found.rate_hz) + " Hz, the comment " + number_text(*rate_hz_) + " Hz",
                   "keep the one that is right");
        }
        if (!rate_hz_) rate_hz_ = found.rate_hz;
    }

    const SignalFileName& name_;
    const SourceText& source_;
    std::string problem_;
    char separator_ = '\0';
    std::vector<CsvCell> cells_;
    std::vector<std::string> names_;
    std::vector<std::vector<double>> columns_;
    bool whole_numbers_ = true;
    std::optional<double> rate_hz_;
    std::optional<std::size_t> time_column_;
    double time_resolution_s_ = 1.0;
    std::vector<int> time_lines_;
};

}  // namespace

std::variant<SignalFile, std::string> read_csv_signal(const SignalFileName& name, const SourceText& source) {
    return CsvReader(name, source).read();
}

}  // namespace halflsb
