// Numbers to text and back, beside the C++ library's.
//
//     number_compare --check N    N random bit patterns and as many other hard values, byte for byte and bit
//     for bit number_compare --time       medians of 11 rounds in one run, and their ratios
//
// A difference ends with status 1.
#include <algorithm>
#include <charconv>
#include <chrono>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <random>
#include <string>
#include <vector>

extern "C" {
size_t anb__number_write(double value, char *buffer);
size_t anb__number_read(const char *text, size_t length, double *value);
}

namespace {

double from_bits(uint64_t bits) {
    double value;
    memcpy(&value, &bits, sizeof value);
    return value;
}

bool same(double a, double b) { return !memcmp(&a, &b, sizeof a); }

// True where both libraries write and read the value alike.
bool agrees(double value) {
    char ours[64], theirs[64];
    size_t length = anb__number_write(value, ours);
    size_t other = static_cast<size_t>(std::to_chars(theirs, theirs + sizeof theirs, value).ptr - theirs);
    if (length != other || memcmp(ours, theirs, length)) {
        printf("%.17g: %.*s, not %.*s\n", value, int(length), ours, int(other), theirs);
        return false;
    }
    double a = 0, b = 0;
    size_t sign = ours[0] == '-';
    size_t taken = anb__number_read(ours + sign, length - sign, &a);
    std::from_chars(ours + sign, ours + length, b);
    if (taken == length - sign && same(a, b))
        return true;
    printf("%.*s reads as %.17g, not %.17g\n", int(length), ours, a, b);
    return false;
}

// Random bit patterns, S-parameters, frequencies and whole numbers in turn.
double pick(std::mt19937_64 &random, long i) {
    switch (i % 4) {
    case 0:
        return from_bits(random());
    case 1:
        return double(int64_t(random())) / 9.3e18;
    case 2:
        return double(random() % 10000000) / 1000;
    default:
        return double(random() >> random() % 64);
    }
}

int check(long count) {
    std::mt19937_64 random(1);
    long bad = 0;
    for (long i = 0; i < count && bad < 20; i++) {
        double bits = from_bits(random()), other = pick(random, i);
        if (bits - bits == 0)
            bad += !agrees(bits);
        if (other - other == 0)
            bad += !agrees(other);
    }
    printf("%ld bit patterns and as many other values checked, %ld differ\n", count, bad);
    return bad ? 1 : 0;
}

template <class Work> double seconds(Work work) {
    auto start = std::chrono::steady_clock::now();
    work();
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

double median(std::vector<double> times) {
    std::sort(times.begin(), times.end());
    return times[times.size() / 2];
}

int measure() {
    std::mt19937_64 random(1);
    std::vector<double> values, ours, theirs, ours_read, theirs_read, strtod_read;
    std::vector<std::string> texts;
    char buffer[64];
    double sum = 0;
    for (int i = 0; i < 100000; i++)
        values.push_back(double(int64_t(random())) / 9.3e18);
    for (double v : values)
        texts.emplace_back(buffer, std::to_chars(buffer, buffer + sizeof buffer, std::abs(v)).ptr);
    for (int round = 0; round < 11; round++) {
        ours.push_back(seconds([&] {
            for (double v : values)
                sum += double(anb__number_write(v, buffer));
        }));
        theirs.push_back(seconds([&] {
            for (double v : values)
                sum += double(std::to_chars(buffer, buffer + sizeof buffer, v).ptr - buffer);
        }));
        double v = 0;
        ours_read.push_back(seconds([&] {
            for (auto &t : texts)
                anb__number_read(t.data(), t.size(), &v), sum += v;
        }));
        theirs_read.push_back(seconds([&] {
            for (auto &t : texts)
                std::from_chars(t.data(), t.data() + t.size(), v), sum += v;
        }));
        strtod_read.push_back(seconds([&] {
            for (auto &t : texts)
                sum += strtod(t.c_str(), nullptr);
        }));
    }
    double n = double(values.size()) * 1e-9, a = median(ours) / n, b = median(theirs) / n;
    double c = median(ours_read) / n, d = median(theirs_read) / n, e = median(strtod_read) / n;
    printf("writing  ours %.1f ns, std::to_chars %.1f ns: ratio %.2f\n", a, b, a / b);
    printf("reading  ours %.1f ns, std::from_chars %.1f ns: ratio %.2f; strtod %.1f ns: ratio %.2f\n", c, d,
           c / d, e, c / e);
    return sum == 42 ? 2 : 0;
}

} // namespace

int main(int count, char **arguments) {
    if (count == 3 && !strcmp(arguments[1], "--check"))
        return check(atol(arguments[2]));
    if (count == 2 && !strcmp(arguments[1], "--time"))
        return measure();
    fprintf(stderr, "usage: number_compare --check N | --time\n");
    return 2;
}
