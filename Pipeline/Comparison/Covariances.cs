using MathNet.Numerics.LinearAlgebra;

namespace Pipeline.Comparison;

/// <summary>Covariances from their factors.</summary>
static class Covariances
{
    /// <summary>diag(variance) + sum of outer products.</summary>
    public static Matrix<double> Of(double[] variance, IReadOnlyCollection<double[]> causes)
    {
        Matrix<double> independent = Matrix<double>.Build.DenseOfDiagonalArray(variance);
        if (causes.Count == 0) return independent;
        Matrix<double> columns = Matrix<double>.Build.DenseOfColumnArrays(causes);
        return independent + columns.TransposeAndMultiply(columns);
    }
}
