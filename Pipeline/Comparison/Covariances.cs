using MathNet.Numerics.LinearAlgebra;

namespace Pipeline.Comparison;

/// <summary>Covariances from their factors.</summary>
static class Covariances
{
    /// <summary>diag(variance) + sum of outer products.</summary>
    public static Matrix<double> Of(double[] variance, IEnumerable<double[]> causes)
    {
        Matrix<double> sum = Matrix<double>.Build.DenseOfDiagonalArray(variance);
        foreach (double[] cause in causes)
        {
            Vector<double> v = Vector<double>.Build.DenseOfArray(cause);
            sum += v.OuterProduct(v);
        }
        return sum;
    }
}
