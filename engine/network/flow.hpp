// SPDX-License-Identifier: GPL-3.0-or-later
// Flows of small linear systems: exp(G·t) by scaling and squaring with a Taylor polynomial of degree 12. Sizes are fixed at
// compile time and nothing is allocated: this is the inner loop of everything.
#pragma once
#include <algorithm>
#include <cmath>
#include <utility>

namespace binwright {

template <int N>
struct Square {
    alignas(32) double a[N][N];
    double* operator[](int row) { return a[row]; }
    const double* operator[](int row) const { return a[row]; }
    static Square identity() {
        Square m{};
        for (int k = 0; k < N; ++k) m[k][k] = 1;
        return m;
    }
};

template <int N>
struct Column {
    alignas(32) double a[N];
    double& operator[](int row) { return a[row]; }
    double operator[](int row) const { return a[row]; }
};

template <int N>
inline void multiply(const Square<N>& x, const Square<N>& y, Square<N>& out) {
    for (int i = 0; i < N; ++i) {
        double row[N] = {};
        for (int k = 0; k < N; ++k) {
            const double f = x[i][k];
            for (int j = 0; j < N; ++j) row[j] += f * y[k][j];
        }
        for (int j = 0; j < N; ++j) out[i][j] = row[j];
    }
}

template <int N>
inline Column<N> operator*(const Square<N>& m, const Column<N>& v) {
    Column<N> out;
    for (int i = 0; i < N; ++i) {
        double sum = 0;
        for (int k = 0; k < N; ++k) sum += m[i][k] * v[k];
        out[i] = sum;
    }
    return out;
}

template <int N>
inline double dot(const double* row, const Column<N>& v) {
    double sum = 0;
    for (int k = 0; k < N; ++k) sum += row[k] * v[k];
    return sum;
}

/// dz/dt = G z with the size of its part that can grow a Taylor series.
template <int N>
struct Generator {
    Square<N> G;
    double norm = 0;  ///< ∞-norm of the state block, per unit of time
};

inline constexpr double kTaylorReach = 0.35;  ///< ‖G·t‖ up to which degree 12 is exact to rounding (0.35^13/13! < 1e-15)

/// Halvings of t after which the Taylor polynomial reaches.
template <int N>
inline int halvings(const Generator<N>& generator, double t) {
    const double size = generator.norm * t;
    return size <= kTaylorReach ? 0 : static_cast<int>(std::ceil(std::log2(size / kTaylorReach)));
}

/// E = exp(G·t).
template <int N>
inline void exponential(const Generator<N>& generator, double t, Square<N>& E) {
    const int s = halvings(generator, t);
    const double step = std::ldexp(t, -s);
    Square<N> X1, X2, X3, X4, sum, next;
    for (int i = 0; i < N; ++i)
        for (int j = 0; j < N; ++j) X1[i][j] = step * generator.G[i][j];
    multiply(X1, X1, X2);
    multiply(X2, X1, X3);
    multiply(X2, X2, X4);
    // Σ X^k/k!, k = 0 … 12, as B0 + X⁴(B1 + X⁴(B2 + X⁴/12!)).
    constexpr double f[] = {1., 1., 1. / 2, 1. / 6, 1. / 24, 1. / 120, 1. / 720, 1. / 5040, 1. / 40320,
                            1. / 362880, 1. / 3628800, 1. / 39916800, 1. / 479001600};
    const auto block = [&](int first, Square<N>& out, const Square<N>& add) {
        for (int i = 0; i < N; ++i) {
            for (int j = 0; j < N; ++j)
                out[i][j] = add[i][j] + f[first + 1] * X1[i][j] + f[first + 2] * X2[i][j] + f[first + 3] * X3[i][j];
            out[i][i] += f[first];
        }
    };
    for (int i = 0; i < N; ++i)
        for (int j = 0; j < N; ++j) next[i][j] = f[12] * X4[i][j];
    block(8, sum, next);
    multiply(X4, sum, next);
    block(4, sum, next);
    multiply(X4, sum, next);
    block(0, E, next);
    for (int k = 0; k < s; ++k) {
        multiply(E, E, next);
        E = next;
    }
}

/// Solves M·x = right (n × n, row-equilibrated, partial pivoting) in place. @returns false where M is singular.
template <int N>
inline bool solve_in_place(double (&M)[N][N], double (&right)[N], int n) {
    for (int i = 0; i < n; ++i) {
        double size = 0;
        for (int j = 0; j < n; ++j) size = std::max(size, std::abs(M[i][j]));
        if (!(size > 0) || !std::isfinite(size)) return false;
        for (int j = 0; j < n; ++j) M[i][j] /= size;
        right[i] /= size;
    }
    for (int k = 0; k < n; ++k) {
        int pivot = k;
        for (int i = k + 1; i < n; ++i)
            if (std::abs(M[i][k]) > std::abs(M[pivot][k])) pivot = i;
        if (!(std::abs(M[pivot][k]) > 1e-300)) return false;
        if (pivot != k) {
            for (int j = k; j < n; ++j) std::swap(M[k][j], M[pivot][j]);
            std::swap(right[k], right[pivot]);
        }
        const double inverse = 1 / M[k][k];
        for (int i = k + 1; i < n; ++i) {
            const double factor = M[i][k] * inverse;
            if (factor == 0) continue;
            for (int j = k + 1; j < n; ++j) M[i][j] -= factor * M[k][j];
            right[i] -= factor * right[k];
        }
    }
    for (int i = n - 1; i >= 0; --i) {
        for (int j = i + 1; j < n; ++j) right[i] -= M[i][j] * right[j];
        right[i] /= M[i][i];
        if (!std::isfinite(right[i])) return false;
    }
    return true;
}

}  // namespace binwright
