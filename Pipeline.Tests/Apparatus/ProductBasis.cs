using MathNet.Numerics.LinearAlgebra;
using Pipeline.Apparatus;

namespace Pipeline.Tests.Apparatus;

/// <summary>The hyperfine Hamiltonian from products of operators over |N m&gt; |m_S&gt; |m_I&gt;, N up to a largest one.</summary>
static class ProductBasis
{
    public static Matrix<double> Hamiltonian(HyperfineConstants k, int largest)
    {
        (int N, int M)[] states = [.. Enumerable.Range(0, largest + 1).SelectMany(n => Enumerable.Range(-n, 2 * n + 1).Select(m => (n, m)))];
        Matrix<double> Rotor(Func<int, int, int, int, double> element) =>
            Matrix<double>.Build.Dense(states.Length, states.Length, (i, j) => element(states[i].N, states[i].M, states[j].N, states[j].M));
        var one = Matrix<double>.Build.DenseIdentity(2);
        var (z, up) = (Matrix<double>.Build.DenseOfArray(new[,] { { 0.5, 0 }, { 0, -0.5 } }), Matrix<double>.Build.DenseOfArray(new[,] { { 0.0, 1 }, { 0, 0 } }));
        Matrix<double> unit = Matrix<double>.Build.DenseIdentity(states.Length);
        Vector3 rotation = Vector3.Of(Rotor((a, m, b, n) => a == b && m == n ? m : 0), Rotor((a, m, b, n) => a == b && m == n + 1 ? Math.Sqrt(a * (a + 1.0) - n * (n + 1.0)) : 0))
            .Times(m => m.KroneckerProduct(one).KroneckerProduct(one));
        Vector3 axis = Vector3.Of(Rotor(AxisZ), Rotor(AxisUp)).Times(m => m.KroneckerProduct(one).KroneckerProduct(one));
        Vector3 spin = Vector3.Of(z, up).Times(m => unit.KroneckerProduct(m).KroneckerProduct(one));
        Vector3 nucleus = Vector3.Of(z, up).Times(m => unit.KroneckerProduct(one).KroneckerProduct(m));
        return k.RotationalConstant * rotation.Dot(rotation) + k.SpinRotation * rotation.Dot(spin) + k.FermiB * nucleus.Dot(spin)
            + k.DipolarC * nucleus.Dot(axis) * spin.Dot(axis) + k.NuclearSpinRotation * rotation.Dot(nucleus);
    }

    /// <summary>cos(theta) between spherical harmonics.</summary>
    static double AxisZ(int a, int m, int b, int n) => m != n || Math.Abs(a - b) != 1 ? 0
        : Math.Sqrt((Square(Math.Max(a, b)) - Square(m)) / (4 * Square(Math.Max(a, b)) - 1));

    /// <summary>sin(theta) exp(i phi) between spherical harmonics: raises m by one.</summary>
    static double AxisUp(int a, int m, int b, int n) => m != n + 1 || Math.Abs(a - b) != 1 ? 0
        : a > b ? -Math.Sqrt((b + n + 1.0) * (b + n + 2) / ((2 * b + 1.0) * (2 * b + 3)))
        : Math.Sqrt((b - n) * (b - n - 1.0) / ((2 * b - 1.0) * (2 * b + 1)));

    static double Square(double x) => x * x;

    /// <summary>A vector operator by its z component and its raising and lowering ones.</summary>
    sealed record Vector3(Matrix<double> Z, Matrix<double> Up, Matrix<double> Down)
    {
        public static Vector3 Of(Matrix<double> z, Matrix<double> up) => new(z, up, up.Transpose());
        public Vector3 Times(Func<Matrix<double>, Matrix<double>> f) => new(f(Z), f(Up), f(Down));
        public Matrix<double> Dot(Vector3 other) => Z * other.Z + 0.5 * (Up * other.Down + Down * other.Up);
    }
}
