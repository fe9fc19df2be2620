#include "runner/config/csv_mask.hpp"

#include <array>
#include <cmath>

#include "runner/config/csv_cells.hpp"
#include "runner/config/value_text.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::array<std::string_view, 4> names = {"from_hz", "to_hz", "min_db", "max_db"};
constexpr std::string_view header_text = "from_hz,to_hz,min_db,max_db";
constexpr std::size_t most_rows = 10000;

class MaskReader {
public:
    MaskReader(const SourceText& source, std::optional<double> nyquist_hz) : source_(source), nyquist_hz_(nyquist_hz) {}

    std::variant<SignalFile, std::string> read(const std::string& path) {
        if (auto text = source_.not_text()) return *text;
        for (int number = 1; number <= source_.line_count() && problem_.empty(); ++number) read_line(number);
        if (problem_.empty() && columns_[0].empty())
            refuse({1, 1}, "there is no row in the mask", "write " + std::string(header_text) + " and a row below it");
        if (problem_.empty() && !has_limit_)
            refuse({1, 1}, "no row of the mask has a limit", "give a min_db or a max_db");
        if (!problem_.empty()) return problem_;
        SignalFile file;
        file.path = path;
        file.names.assign(names.begin(), names.end());
        file.columns.assign(columns_.begin(), columns_.end());
        return file;
    }

private:
    void refuse(Place place, std::string_view problem, std::string_view remedy) {
        if (problem_.empty()) problem_ = source_.render(place, problem, remedy);
    }
    Place place_of(std::size_t cell) const { return csv_place(number_, line_, cells_[cell].offset); }

    void read_line(int number) {
        const std::string_view whole = source_.line(number);
        line_ = whole.substr(0, whole.find('#'));
        number_ = number;
        if (line_.find_first_not_of(" \t") == std::string_view::npos) return;
        split_cells(line_, ',', cells_);
        if (has_header_) {
            read_row();
        } else {
            read_header();
        }
    }

    void read_header() {
        has_header_ = true;
        bool is_right = cells_.size() == names.size();
        for (std::size_t c = 0; is_right && c < names.size(); ++c) is_right = cells_[c].text == names[c];
        if (!is_right) {
            refuse(place_of(0), "this is not the header of a mask",
                   "begin with the line " + std::string(header_text) + ", with commas");
        }
    }

    void read_row() {
        if (cells_.size() != names.size()) {
            refuse(place_of(0),
                   std::to_string(cells_.size()) + (cells_.size() == 1 ? " cell" : " cells") +
                       " in this line, a row of a mask has 4",
                   "write from_hz,to_hz,min_db,max_db with commas, and nothing in a cell that limits nothing");
            return;
        }
        if (columns_[0].size() == most_rows) {
            refuse(place_of(0), "more than " + std::to_string(most_rows) + " rows", "join rows that ask the same");
            return;
        }
        std::array<double, 4> row{0.0, 0.0, -HUGE_VAL, HUGE_VAL};
        for (std::size_t c = 0; c < row.size(); ++c) {
            const std::string_view text = cells_[c].text;
            if (c >= 2 && text.empty()) continue;
            const auto value = csv_number(text);
            if (!value || !std::isfinite(*value)) {
                refuse(place_of(c),
                       std::string(names[c]) +
                           (text.empty() ? " is missing" : " = " + quoted(text) + " is no finite number"),
                       c >= 2 ? "write a number with a decimal point, or nothing where there is no limit"
                              : "write a number with a decimal point");
                return;
            }
            row[c] = *value;
        }
        if (!row_holds(row)) return;
        has_limit_ = has_limit_ || std::isfinite(row[2]) || std::isfinite(row[3]);
        for (std::size_t c = 0; c < row.size(); ++c) columns_[c].push_back(row[c]);
    }

    bool row_holds(const std::array<double, 4>& row) {
        const auto [from_hz, to_hz, min_db, max_db] = row;
        if (from_hz < 0.0) {
            refuse(place_of(0), "from_hz = " + number_text(from_hz) + " is below 0", "begin at 0 Hz or above");
        } else if (!(from_hz < to_hz)) {
            refuse(place_of(0), "the row " + number_text(from_hz) + " to " + number_text(to_hz) + " Hz runs backwards",
                   "from_hz must be below to_hz");
        } else if (nyquist_hz_ && !(to_hz <= *nyquist_hz_)) {
            const std::string nyquist = number_text(*nyquist_hz_) + " Hz";
            refuse(place_of(1), "the mask ends above Nyquist, " + nyquist,
                   "end it at " + nyquist + " or below, or correct rate_hz");
        } else if (!(min_db <= max_db)) {
            refuse(place_of(2),
                   "the limits cross: min_db = " + number_text(min_db) + " is above max_db = " + number_text(max_db),
                   "exchange them");
        } else if (!columns_[1].empty() && from_hz > columns_[1].back()) {
            const std::string from = number_text(columns_[1].back()), to = number_text(from_hz);
            refuse(place_of(0), "the mask has a gap from " + from + " to " + to + " Hz",
                   "close it, or say that nothing is asked there with a row " + from + "," + to + ",,");
        } else if (!columns_[1].empty() && from_hz < columns_[1].back()) {
            refuse(place_of(0),
                   "this row begins below the end of the one before, " + number_text(columns_[1].back()) + " Hz",
                   "rows ascend and touch; begin this one there");
        } else {
            return true;
        }
        return false;
    }

    const SourceText& source_;
    std::optional<double> nyquist_hz_;
    std::string problem_;
    std::string_view line_;
    int number_ = 0;
    std::vector<CsvCell> cells_;
    bool has_header_ = false, has_limit_ = false;
    std::array<std::vector<double>, 4> columns_;
};

}  // namespace

std::variant<SignalFile, std::string> read_csv_mask(const std::string& path_as_written, const SourceText& source,
                                                    std::optional<double> nyquist_hz) {
    return MaskReader(source, nyquist_hz).read(path_as_written);
}

}  // namespace halflsb
