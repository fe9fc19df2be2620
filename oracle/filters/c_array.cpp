#include "oracle/filters/c_array.hpp"

#include <algorithm>

#include "oracle/filters/c_declarations.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_names_shown = 6;
constexpr int deepest_braces = 4;
constexpr std::string_view plain = "write the numbers in their order, between commas";

FileProblem refused(std::size_t at, std::string problem, std::string_view remedy) {
    return {at, {}, std::move(problem), std::string(remedy)};
}

/// Reads one initialiser into rows of numbers.
class InitialiserReader {
public:
    InitialiserReader(const CSource& source, const CDeclaration& declaration, const CArrayWish& wish)
        : declaration_(declaration), wish_(wish), expression_(source), type_(c_type_of(declaration.type, source)) {
        if (wish.word_bits && (type_.kind == CType::Kind::unknown ||
                               (type_.kind == CType::Kind::integer && type_.bits != type_.least_bits))) {
            if (type_.kind == CType::Kind::unknown)
                type_.name = "a word of " + std::to_string(*wish.word_bits) + " bits";
            type_.kind = CType::Kind::integer;
            type_.bits = type_.least_bits = *wish.word_bits;
        }
    }

    ReadTable read() {
        if (wish_.word_bits && type_.kind == CType::Kind::integer && type_.bits != *wish_.word_bits) {
            return FileProblem{
                std::nullopt, "file_word_bits",
                "file_word_bits = " + std::to_string(*wish_.word_bits) + ", and the array is of " + type_.name,
                "leave file_word_bits out: the type says it"};
        }
        if (declaration_.sizes.size() > 2) {
            return refused(declaration_.name.at,
                           "the array has " + std::to_string(declaration_.sizes.size()) + " dimensions",
                           "give an array of one dimension, or of two with a section a row");
        }
        if (!read_sizes()) return *std::move(problem_);
        CCursor cursor = declaration_.initialiser;
        if (declaration_.is_std_array) enter_doubled_braces(cursor);
        read_braces(cursor, 0);
        if (!problem_) fill_up();
        if (problem_) return *std::move(problem_);
        table_.is_integer_type = type_.kind == CType::Kind::integer;
        table_.type_name = type_.name;
        return std::move(table_);
    }

    /// Of a file that is only numbers between commas, as an array includes it.
    ReadTable read_bare(CCursor cursor) {
        read_items(cursor, 0, CToken::Kind::end);
        if (problem_) return *std::move(problem_);
        if (!has_rows_) end_row(cursor.token().at);
        if (problem_) return *std::move(problem_);
        return std::move(table_);
    }

private:
    bool refuse(std::size_t at, std::string problem, std::string_view remedy) {
        if (!problem_) problem_ = refused(at, std::move(problem), remedy);
        return false;
    }

    bool read_sizes() {
        for (const std::vector<CToken>& tokens : declaration_.sizes) {
            sizes_.emplace_back();
            if (tokens.empty()) {
                if (sizes_.size() == 1) continue;
                return refuse(declaration_.name.at, "the length of a row is not stated",
                              "write it into the second brackets");
            }
            std::vector<CToken> ended = tokens;
            ended.push_back({CToken::Kind::end, {}, tokens.back().at + tokens.back().text.size()});
            CCursor cursor{&ended, 0};
            const auto size = expression_.read(cursor);
            if (const auto* problem = std::get_if<FileProblem>(&size)) {
                if (sizes_.size() == 1 && wish_.count_is_known) continue;
                return refuse(*problem->byte, "the size of the array: " + problem->problem,
                              "write the size as a number, or say in the plan how many there are: file_count");
            }
            const CValue& value = std::get<CValue>(size);
            if (cursor.token().kind != CToken::Kind::end || value.is_real || value.is_negative ||
                value.magnitude == 0 || value.magnitude > most_file_numbers) {
                return refuse(tokens.front().at, "this is no size of an array of coefficients",
                              "give a whole number from 1 to " + std::to_string(most_file_numbers));
            }
            sizes_.back() = static_cast<std::size_t>(value.magnitude);
        }
        if (sizes_.size() == 2 && sizes_[0].value_or(1) * *sizes_[1] > most_file_numbers)
            return refuse(declaration_.name.at, too_many(), plain);
        return true;
    }
    static std::string too_many() { return "there are more than " + std::to_string(most_file_numbers) + " numbers"; }

    /// std::array<float, 2> x = {{1, 2}}: the inner braces are those of the array in it.
    static void enter_doubled_braces(CCursor& cursor) {
        if (!cursor.behind().is("{")) return;
        CCursor end{cursor.tokens, cursor.index + 1};
        for (int depth = 0; end.token().kind != CToken::Kind::end; end.advance()) {
            if (end.token().is("{")) ++depth;
            if (end.token().is("}") && --depth == 0) break;
        }
        if (end.behind().is("}")) cursor.advance();
    }

    /// A list in braces; the cursor then stands behind it.
    bool read_braces(CCursor& cursor, int depth) {
        const std::size_t open = cursor.token().at;
        if (depth >= deepest_braces) return refuse(open, "braces stand too deep in each other", plain);
        cursor.advance();
        if (!read_items(cursor, depth, CToken::Kind::mark)) return false;
        if (depth == 0) {
            end_ = cursor.token().at;
            if (!has_rows_) end_row(end_);
        } else if (depth == 1 && declaration_.is_array) {
            has_rows_ = true;
            end_row(cursor.token().at);
        }
        cursor.advance();
        return !problem_;
    }

    /// Up to the } of the list, or to the end of a bare one.
    bool read_items(CCursor& cursor, int depth, CToken::Kind until) {
        const auto is_end = [&] {
            return until == CToken::Kind::end ? cursor.token().kind == CToken::Kind::end : cursor.token().is("}");
        };
        bool has_numbers = false, has_braces = false;
        while (!is_end()) {
            if (problem_) return false;
            const CToken token = cursor.token();
            const std::size_t at = token.at;
            if (token.is(".") || token.is("["))
                return refuse(at, "a designated initialiser chooses its own order", plain);
            const bool is_braces = token.is("{");
            (is_braces ? has_braces : has_numbers) = true;
            if (has_braces && has_numbers)
                return refuse(at, "numbers and braces stand side by side", "put each row into braces, or none");
            if (is_braces ? !may_nest(at, depth) || !read_braces(cursor, depth + 1) : !read_number(cursor))
                return false;
            if (cursor.token().is(",")) {
                cursor.advance();
            } else if (!is_end()) {
                return cursor.token().kind == CToken::Kind::end
                           ? refuse(at, "the array has no end", "is the file whole?")
                           : refuse(cursor.token().at,
                                    "a comma is missing before " + quoted_from_file(cursor.token().text),
                                    "write numbers between commas, as C has them");
            }
        }
        return !problem_;
    }

    /// Braces inside the outermost are rows: of two dimensions, of structs, or of a bare list.
    bool may_nest(std::size_t at, int depth) {
        const bool is_known = type_.kind != CType::Kind::unknown || wish_.word_bits;
        if (declaration_.sizes.size() < 2 && type_.kind != CType::Kind::unknown && !wish_.word_bits)
            return refuse(at, "braces around a number of " + type_.name, plain);
        if (declaration_.sizes.size() == 2 && depth >= 1 && is_known)
            return refuse(at, "braces around a number of " + type_.name, plain);
        return true;
    }

    bool read_number(CCursor& cursor) {
        const CCursor first = cursor;
        auto read = expression_.read(cursor);
        if (auto* problem = std::get_if<FileProblem>(&read)) {
            problem_ = std::move(*problem);
            return false;
        }
        const CValue& value = std::get<CValue>(read);
        auto stored = stored_in(type_, value, written_between(first, cursor));
        if (auto* complaint = std::get_if<CComplaint>(&stored))
            return refuse(first.token().at, std::move(complaint->problem), complaint->remedy);
        return add(std::get<double>(stored), first.token().at);
    }

    bool add(double number, std::size_t at) {
        if (table_.numbers.size() >= most_file_numbers) return refuse(at, too_many(), plain);
        table_.numbers.push_back(number);
        table_.places.push_back(at);
        return true;
    }

    /// A row that is shorter than its array says ends in zeros.
    void end_row(std::size_t at) {
        const std::size_t count = table_.numbers.size() - row_begin_;
        if (count == 0) {
            refuse(at, "there is no number in these braces", plain);
            return;
        }
        if (has_rows_) {
            const std::size_t length = sizes_.size() == 2 ? *sizes_[1] : row_count_ == 0 ? count : table_.row_numbers;
            if (count > length || (sizes_.size() < 2 && count < length)) {
                refuse(table_.places[row_begin_],
                       "this row has " + std::to_string(count) + " numbers, " +
                           (sizes_.size() == 2 ? "its array says " : "the first one has ") + std::to_string(length),
                       "give each row the same count of numbers");
                return;
            }
            for (std::size_t i = count; i < length && add(0.0, at);) ++i;
            table_.row_numbers = length;
            ++row_count_;
        }
        row_begin_ = table_.numbers.size();
    }

    void fill_up() {
        if (sizes_.empty()) return;
        if (sizes_.size() == 2) table_.row_numbers = *sizes_[1];
        const std::size_t row = table_.row_numbers == 0 ? 1 : table_.row_numbers;
        const std::size_t rows = (table_.numbers.size() + row - 1) / row;
        const std::size_t all = sizes_[0].value_or(rows);
        if (rows > all) {
            refuse(table_.places[all * row],
                   "the array has " + std::to_string(rows) + (row == 1 ? " numbers" : " rows") + ", its size is " +
                       std::to_string(all),
                   "correct the size, or the numbers");
            return;
        }
        // By division: the size is what the file claims.
        if (all > most_file_numbers / row) {
            refuse(declaration_.name.at, too_many(), plain);
            return;
        }
        while (table_.numbers.size() < all * row && add(0.0, end_)) {
        }
    }

    const CDeclaration& declaration_;
    const CArrayWish& wish_;
    CExpression expression_;
    CType type_;
    std::vector<std::optional<std::size_t>> sizes_;
    CoefficientTable table_;
    std::size_t row_begin_ = 0, row_count_ = 0, end_ = 0;
    bool has_rows_ = false;
    std::optional<FileProblem> problem_;
};

std::string names_of(const std::vector<CDeclaration>& declarations) {
    std::string text;
    std::size_t count = 0;
    for (const CDeclaration& declaration : declarations) {
        if (!declaration.is_array) continue;
        if (++count > most_names_shown) return text + " and more";
        text += (text.empty() ? "" : ", ") + std::string(declaration.name.text.substr(0, 60));
    }
    return text;
}

FileProblem about_plan(std::string_view word, std::string problem, std::string remedy) {
    return {std::nullopt, std::string(word), std::move(problem), std::move(remedy)};
}

/// Numbers between commas and nothing else.
bool is_bare_list(const CSource& source) {
    const CToken& first = source.tokens.front();
    return first.kind == CToken::Kind::number || first.is("-") || first.is("+") || first.is("(") || first.is("{");
}

}  // namespace

ReadTable read_c_array(std::string_view text, const CArrayWish& wish) {
    const auto read = read_c_tokens(text);
    if (const auto* problem = std::get_if<FileProblem>(&read)) return *problem;
    const CSource& source = std::get<CSource>(read);
    const std::vector<CDeclaration> all = c_declarations(source);
    const auto arrays = std::count_if(all.begin(), all.end(), [](const CDeclaration& d) { return d.is_array; });
    if (wish.name.empty()) {
        if (arrays == 0 && is_bare_list(source)) {
            const CDeclaration none;
            return InitialiserReader(source, none, wish).read_bare({&source.tokens, 0});
        }
        if (arrays == 0) {
            return refused(0, "there is no array with numbers in the file",
                           "name the file that holds the numbers: a header may only declare the array");
        }
        if (arrays > 1) {
            return about_plan("", "the file holds " + std::to_string(arrays) + " arrays: " + names_of(all),
                              "choose one: file_array = " + std::string("\"...\""));
        }
    }
    const CDeclaration* chosen = nullptr;
    for (const CDeclaration& declaration : all) {
        if (wish.name.empty() ? !declaration.is_array : declaration.name.text != wish.name) continue;
        if (chosen != nullptr) {
            return refused(declaration.name.at, "a second array is called " + quoted_from_file(wish.name),
                           "which one is compiled cannot be seen here: put the firmware's own into a file of its own");
        }
        chosen = &declaration;
    }
    if (chosen == nullptr) {
        return about_plan("file_array", "file_array = " + quoted_from_file(wish.name) + ": the file has no such array",
                          arrays == 0 ? std::string("it has none with numbers")
                                      : (arrays == 1 ? "its array is " : "its arrays are ") + names_of(all));
    }
    return InitialiserReader(source, *chosen, wish).read();
}

}  // namespace halflsb
