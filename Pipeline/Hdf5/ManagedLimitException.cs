namespace Pipeline.Hdf5;

/// <summary>A legal file that the managed library cannot be trusted with; the C library reads it.</summary>
sealed class ManagedLimitException(Fault fault) : DataFaultException(fault);
