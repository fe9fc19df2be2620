#include "oracle/filters/c_tokens.hpp"

#include <algorithm>
#include <optional>

namespace halflsb {

namespace {

constexpr std::size_t most_tokens = 1'000'000;
constexpr std::size_t most_conditions = 64;
constexpr std::string_view own_file = "put the array into a file of its own";

bool is_digit(char c) { return c >= '0' && c <= '9'; }
bool is_name_start(char c) { return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || c == '_'; }
bool is_name_part(char c) { return is_name_start(c) || is_digit(c); }
bool is_blank(char c) { return c == ' ' || c == '\t' || c == '\r' || c == '\v' || c == '\f'; }

class Lexer {
public:
    explicit Lexer(std::string_view text) : text_(text) {}

    std::variant<CSource, FileProblem> read() {
        while (!problem_) {
            skip_space(false);
            if (problem_ || at_ >= text_.size()) break;
            if (text_[at_] == '#' && is_line_start_) {
                read_directive();
            } else if (is_dead()) {
                skip_dead_line();
            } else {
                is_line_start_ = false;
                take_token(source_.tokens);
            }
        }
        if (!problem_ && !conditions_.empty())
            refuse(conditions_.back().at, "this #if has no #endif", "is the file whole?");
        if (problem_) return *std::move(problem_);
        source_.tokens.push_back({CToken::Kind::end, {}, text_.size()});
        gather_type_names();
        return std::move(source_);
    }

private:
    struct Condition {
        std::size_t at = 0;
        bool is_decided = false;  ///< #if 0, #if 1
        bool was_taken = false;   ///< of a decided one: a half before this one is compiled
        bool is_dead = false;
        std::string_view unless_defined = {};  ///< the name behind #ifndef
    };

    void refuse(std::size_t at, std::string problem, std::string_view remedy) {
        if (!problem_) problem_ = FileProblem{at, {}, std::move(problem), std::string(remedy)};
    }
    bool is_dead() const {
        for (const Condition& condition : conditions_) {
            if (condition.is_dead) return true;
        }
        return false;
    }
    bool starts(std::string_view wanted) const { return text_.substr(at_, wanted.size()) == wanted; }

    /// Bytes of a backslash at `at` with the line break behind it; blanks between are forgiven, as compilers do.
    std::size_t continuation(std::size_t at) const {
        if (at >= text_.size() || text_[at] != '\\') return 0;
        std::size_t end = at + 1;
        while (end < text_.size() && is_blank(text_[end])) ++end;
        return end < text_.size() && text_[end] == '\n' ? end + 1 - at : 0;
    }

    /// To the next word; with `in_line` no further than the end of the line.
    void skip_space(bool in_line) {
        while (at_ < text_.size() && !problem_) {
            if (const std::size_t bytes = continuation(at_)) {
                at_ += bytes;
            } else if (is_blank(text_[at_])) {
                ++at_;
            } else if (text_[at_] == '\n') {
                if (in_line) return;
                ++at_;
                is_line_start_ = true;
            } else if (starts("//")) {
                skip_line();
            } else if (starts("/*")) {
                const std::size_t end = text_.find("*/", at_ + 2);
                if (end == std::string_view::npos) return refuse(at_, "this comment has no end", "write */ behind it");
                at_ = end + 2;
            } else {
                return;
            }
        }
    }

    /// To the end of a line and of those that continue it, whatever stands there.
    void skip_line() {
        while (at_ < text_.size() && text_[at_] != '\n') {
            const std::size_t bytes = continuation(at_);
            at_ += bytes > 0 ? bytes : 1;
        }
    }

    /// In what is not compiled only comments and strings that are closed count.
    void skip_dead_line() {
        is_line_start_ = false;
        while (at_ < text_.size() && text_[at_] != '\n') {
            if (starts("//")) return skip_line();
            if (starts("/*")) return;
            if (text_[at_] == '"') {
                const std::size_t end = text_.find_first_of("\"\n", at_ + 1);
                if (end != std::string_view::npos && text_[end] == '"') at_ = end;
            }
            const std::size_t bytes = continuation(at_);
            at_ += bytes > 0 ? bytes : 1;
        }
    }

    std::string_view take_name() {
        const std::size_t begin = at_;
        while (at_ < text_.size() && is_name_part(text_[at_])) ++at_;
        return text_.substr(begin, at_ - begin);
    }

    void take_token(std::vector<CToken>& into) {
        if (++token_count_ > most_tokens)
            return refuse(at_, "the file has more than " + std::to_string(most_tokens) + " words", own_file);
        const std::size_t begin = at_;
        const char first = text_[at_];
        CToken::Kind kind = CToken::Kind::mark;
        if (is_name_start(first)) {
            kind = CToken::Kind::name;
            const std::string_view name = take_name();
            if (name.ends_with('R') && name.size() <= 3 && at_ < text_.size() && text_[at_] == '"')
                return refuse(begin, "a raw string is not read here", own_file);
        } else if (is_digit(first) || (first == '.' && at_ + 1 < text_.size() && is_digit(text_[at_ + 1]))) {
            kind = CToken::Kind::number;
            take_number();
        } else if (first == '"' || first == '\'') {
            kind = CToken::Kind::text;
            take_text(first);
        } else {
            ++at_;
        }
        if (!problem_) into.push_back({kind, text_.substr(begin, at_ - begin), begin});
    }

    void take_number() {
        ++at_;
        while (at_ < text_.size()) {
            const char c = text_[at_], before = text_[at_ - 1];
            // 1'000 of C++ and C23.
            const bool is_separator = c == '\'' && at_ + 1 < text_.size() && is_name_part(text_[at_ + 1]);
            const bool is_exponent = before == 'e' || before == 'E' || before == 'p' || before == 'P';
            if (!is_name_part(c) && c != '.' && !is_separator && !(is_exponent && (c == '+' || c == '-'))) return;
            ++at_;
        }
    }

    void take_text(char quote) {
        const std::size_t begin = at_++;
        while (at_ < text_.size() && text_[at_] != quote) {
            if (const std::size_t bytes = continuation(at_)) {
                at_ += bytes;
                continue;
            }
            if (text_[at_] == '\n') break;
            at_ += text_[at_] == '\\' && at_ + 1 < text_.size() && text_[at_ + 1] != '\n' ? 2 : 1;
        }
        if (at_ >= text_.size() || text_[at_] != quote)
            return refuse(begin, "this quotation mark is not closed in its line",
                          "close it, or " + std::string(own_file));
        ++at_;
    }

    void read_directive() {
        const std::size_t begin = at_++;
        is_line_start_ = false;
        skip_space(true);
        const std::string_view word = take_name();
        if (word == "if" || word == "ifdef" || word == "ifndef") {
            open_condition(begin, word);
        } else if (word == "elif" || word == "else" || word == "elifdef" || word == "elifndef") {
            next_half(begin, word);
        } else if (word == "endif") {
            if (conditions_.empty()) return refuse(begin, "this #endif has no #if", "is the file whole?");
            const bool was_decided = conditions_.back().is_decided;
            conditions_.pop_back();
            if (!was_decided) add_directive(begin);
        } else if (!is_dead() && (word == "define" || word == "undef")) {
            read_macro(word == "undef");
        } else if (!is_dead() && (word == "include" || word == "embed" || word == "import")) {
            add_directive(begin);
        }
        // Of #pragma, #error and the rest nothing counts, not even their quotation marks.
        skip_space(true);
        while (!problem_ && at_ < text_.size() && text_[at_] != '\n') {
            starts("/*") || starts("//") ? skip_space(true) : skip_one();
        }
    }
    void skip_one() {
        const std::size_t bytes = continuation(at_);
        at_ += bytes > 0 ? bytes : 1;
    }
    void add_directive(std::size_t begin) {
        if (!is_dead()) source_.tokens.push_back({CToken::Kind::directive, text_.substr(begin, at_ - begin), begin});
    }

    std::vector<CToken> rest_of_line() {
        std::vector<CToken> tokens;
        for (skip_space(true); !problem_ && at_ < text_.size() && text_[at_] != '\n'; skip_space(true))
            take_token(tokens);
        tokens.push_back({CToken::Kind::end, {}, at_});
        return tokens;
    }

    void open_condition(std::size_t begin, std::string_view word) {
        Condition condition{begin, false, false, false, {}};
        if (word == "if" && !is_dead()) {
            const std::vector<CToken> tokens = rest_of_line();
            const bool is_one_word = tokens.size() == 2;
            if (is_one_word && (tokens[0].is("0") || tokens[0].is("1"))) {
                condition.is_decided = true;
                condition.was_taken = tokens[0].is("1");
                condition.is_dead = !condition.was_taken;
            }
        }
        if (word == "ifndef") {
            skip_space(true);
            condition.unless_defined = take_name();
        }
        if (!condition.is_decided) add_directive(begin);
        if (conditions_.size() == most_conditions)
            return refuse(begin, "more than " + std::to_string(most_conditions) + " #if stand in each other", own_file);
        conditions_.push_back(condition);
    }

    void next_half(std::size_t begin, std::string_view word) {
        if (conditions_.empty())
            return refuse(begin, "this #" + std::string(word) + " has no #if", "is the file whole?");
        Condition& condition = conditions_.back();
        if (!condition.is_decided) return add_directive(begin);
        condition.is_dead = condition.was_taken;
        if (word == "else") {
            condition.was_taken = true;
        } else if (!condition.was_taken) {
            // Whether this half is compiled is not known: from here on it is an #if like others.
            condition.is_decided = false;
            add_directive(begin);
        }
    }

    void read_macro(bool is_undefined) {
        skip_space(true);
        CMacro macro{at_, {}, false, is_undefined};
        const std::string name(take_name());
        if (name.empty()) return;
        macro.is_function = at_ < text_.size() && text_[at_] == '(';
        macro.body = rest_of_line();
        macro.is_default = std::any_of(conditions_.begin(), conditions_.end(),
                                       [&](const Condition& condition) { return condition.unless_defined == name; });
        source_.macros[name].push_back(std::move(macro));
    }

    /// Only of the plain form: typedef, names, the new name.
    void gather_type_names() {
        const std::vector<CToken>& tokens = source_.tokens;
        for (std::size_t i = 0; i < tokens.size(); ++i) {
            if (!tokens[i].is("typedef")) continue;
            std::size_t end = i + 1;
            while (tokens[end].kind == CToken::Kind::name) ++end;
            if (!tokens[end].is(";") || end < i + 3) continue;
            const auto begin = tokens.begin() + static_cast<std::ptrdiff_t>(i);
            const auto name = tokens.begin() + static_cast<std::ptrdiff_t>(end) - 1;
            const auto [known, is_new] = source_.type_names.emplace(name->text, std::vector<CToken>(begin + 1, name));
            if (!is_new) known->second.clear();
            i = end;
        }
    }

    std::string_view text_;
    std::size_t at_ = 0, token_count_ = 0;
    bool is_line_start_ = true;
    std::vector<Condition> conditions_;
    CSource source_;
    std::optional<FileProblem> problem_;
};

}  // namespace

std::variant<CSource, FileProblem> read_c_tokens(std::string_view text) { return Lexer(text).read(); }

}  // namespace halflsb
