using MathNet.Numerics.LinearAlgebra;
using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

/// <summary>Examples of the Guide to the Expression of Uncertainty in Measurement, JCGM 100:2008, through the program's least squares.</summary>
public class GumTests
{
    /// <remarks>H.3, calibration of a thermometer: printed -0.1712(29), 0.00218(67), -0.930, s 0.0035 and b(30) = -0.1494(41); more digits
    /// recomputed by this team from the printed data.</remarks>
    [Fact]
    public void Minimise_ThermometerOfH3_GivesLineErrorsAndCorrelation()
    {
        double[] t = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511];
        double[] b = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160];
        LeastSquaresResult fit = LeastSquares.Minimise((y, r, j) =>
        {
            for (int i = 0; i < t.Length; i++)
            {
                r[i] = y[0] + y[1] * (t[i] - 20) - b[i];
                if (!j.IsEmpty) (j[2 * i], j[2 * i + 1]) = (1, t[i] - 20);
            }
        }, t.Length, [0, 0]);
        double variance = fit.SumOfSquares / (t.Length - 2);
        Matrix<double> covariance = Covariance(fit, 2) * variance;
        Assert.True(fit.Converged);
        Assert.Equal(-0.17120379, fit.Parameters[0], 5.1e-9);
        Assert.Equal(0.0021827, fit.Parameters[1], 5.1e-8);
        Assert.Equal(0.0028776, Math.Sqrt(covariance[0, 0]), 5.1e-8);
        Assert.Equal(0.00066794, Math.Sqrt(covariance[1, 1]), 5.1e-9);
        Assert.Equal(-0.930430, Correlation(covariance, 0, 1), 5.1e-7);
        Assert.Equal(0.00349756, Math.Sqrt(variance), 5.1e-9);
        Vector<double> at = Vector<double>.Build.Dense([1, 10]);
        Assert.Equal(-0.1493768, at * Vector<double>.Build.Dense(fit.Parameters), 5.1e-8);
        Assert.Equal(0.0041386, Math.Sqrt(at * covariance * at), 5.1e-8);
        // what forgetting the covariance would give
        Assert.Equal(0.0072729, Math.Sqrt(covariance[0, 0] + 100 * covariance[1, 1]), 5.1e-8);
    }

    /// <remarks>H.2, resistance and reactance from five sets of voltage, current and phase measured together: printed 127.732(71),
    /// 219.847(295), 254.260(236) and -0.588, -0.485, 0.993; more digits recomputed by this team. Correlated data enter a least-squares
    /// problem by the Cholesky factor of their covariance; three data and three unknowns leave no residual.</remarks>
    [Fact]
    public void Minimise_ImpedanceOfH2_CarriesTheCorrelationOfItsData()
    {
        double[][] sets =
        [
            [5.007, 4.994, 5.005, 4.990, 4.999], [19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3], [1.0456, 1.0438, 1.0468, 1.0428, 1.0433],
        ];
        double[] means = [.. sets.Select(s => s.Average())];
        Matrix<double> data = Matrix<double>.Build.Dense(3, 3, (a, b) => sets[a].Zip(sets[b], (x, y) => (x - means[a]) * (y - means[b])).Sum() / 20);
        Assert.Equal([-0.355311, 0.857624, -0.645111], new[] { Correlation(data, 0, 1), Correlation(data, 0, 2), Correlation(data, 1, 2) }.Select(r => Math.Round(r, 6)));
        LeastSquaresResult fit = LeastSquares.Minimise(Impedance(means, data), 3, [100, 200, 0.02]);
        Matrix<double> covariance = Covariance(fit, 3);
        (double r, double x) = (fit.Parameters[0], fit.Parameters[1]);
        Assert.Equal(127.732170, r, 5.1e-7);
        Assert.Equal(219.846512, x, 5.1e-7);
        Assert.Equal(0.071071, Math.Sqrt(covariance[0, 0]), 5.1e-7);
        Assert.Equal(0.295582, Math.Sqrt(covariance[1, 1]), 5.1e-7);
        Assert.Equal(-0.588430, Correlation(covariance, 0, 1), 5.1e-7);
        double z = double.Hypot(r, x);
        Matrix<double> slopes = Matrix<double>.Build.DenseOfRowArrays([1, 0, 0], [0, 1, 0], [r / z, x / z, 0]), all = slopes * covariance * slopes.Transpose();
        Assert.Equal(254.259702, z, 5.1e-7);
        Assert.Equal(0.236336, Math.Sqrt(all[2, 2]), 5.1e-7);
        Assert.Equal(-0.485259, Correlation(all, 0, 2), 5.1e-7);
        Assert.Equal(0.992512, Correlation(all, 1, 2), 5.1e-7);
    }

    /// <summary>V = I |Z|, I and the phase from R, X and I; residuals made independent.</summary>
    static ResidualFunction Impedance(double[] means, Matrix<double> data)
    {
        double[] factor = data.ToRowMajorArray();
        Assert.True(Cholesky.Factor(factor, 3, 3));
        return (y, residuals, jacobian) =>
        {
            double z = double.Hypot(y[0], y[1]);
            double[] model = [y[2] * z, y[2], Math.Atan2(y[1], y[0])];
            Whiten([model[0] - means[0], model[1] - means[1], model[2] - means[2]]).CopyTo(residuals);
            if (jacobian.IsEmpty) return;
            double[][] columns = [[y[2] * y[0] / z, 0, -y[1] / (z * z)], [y[2] * y[1] / z, 0, y[0] / (z * z)], [z, 1, 0]];
            for (int k = 0; k < 3; k++)
            {
                double[] column = Whiten(columns[k]);
                for (int i = 0; i < 3; i++) jacobian[3 * i + k] = column[i];
            }
        };

        double[] Whiten(double[] v)
        {
            // forward substitution: L u = v
            for (int i = 0; i < 3; i++) v[i] = (v[i] - Cholesky.Dot(factor.AsSpan(3 * i, i), v.AsSpan(0, i))) / factor[4 * i];
            return v;
        }
    }

    static Matrix<double> Covariance(LeastSquaresResult fit, int p) => Matrix<double>.Build.DenseOfRowMajor(p, p, fit.Normal).Inverse();

    static double Correlation(Matrix<double> c, int a, int b) => c[a, b] / Math.Sqrt(c[a, a] * c[b, b]);
}
